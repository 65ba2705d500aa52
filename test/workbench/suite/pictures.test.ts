/** Pictures of the window for people to look at, in test-artifacts/, and what must be seen on them. */
import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { closeAll, open, set, settled, shown } from './support.ts'
import { Window } from './window.ts'

const THEMES = {
  light: 'Default Light Modern',
  dark: 'Default Dark Modern',
  'high-contrast': 'Default High Contrast',
  'high-contrast-light': 'Default High Contrast Light',
}

describe('pictures', () => {
  let window: Window

  before(async function () {
    const connected = await Window.connect()
    if (!connected) return this.skip()
    window = connected
  })
  after(async () => {
    await window?.close()
    await set('workbench', 'colorTheme', undefined)
    await closeAll()
  })

  async function hoverAt(editor: vscode.TextEditor, position: vscode.Position, text: string): Promise<void> {
    editor.selection = new vscode.Selection(position, position)
    // By default the command turns to a hover that is still shown.
    await vscode.commands.executeCommand('editor.action.showHover', { focus: 'noAutoFocus' })
    await window.page.locator('.monaco-hover:visible', { hasText: text }).first().waitFor()
  }

  for (const [name, theme] of Object.entries(THEMES)) {
    it(`a finding and a hover, ${name}`, async () => {
      await set('workbench', 'colorTheme', theme)
      const editor = await open('lead-telluride.lattice.yaml')
      await shown(editor.document.uri, 'path-label-unknown', 1)
      await window.page.locator('.squiggly-error').first().waitFor()
      await hoverAt(editor, editor.document.positionAt(editor.document.getText().indexOf('Ww') + 1), 'Ww')
      await window.picture(`finding-${name}`)
      await hoverAt(editor, new vscode.Position(1, 2), 'b₁')
      await window.picture(`hover-${name}`)
    })

    it(`colours, ${name}`, async () => {
      await set('workbench', 'colorTheme', theme)
      const editor = await open('colours.lattice.yaml')
      await settled(editor.document)
      // The look-alikes that the editor warns of elsewhere are letters and dashes of the trade here.
      assert.strictEqual(await window.page.locator('.unicode-highlight').count(), 0)
      await window.picture(`colours-${name}`)
    })
  }

  it('the status item names the crystal and counts the findings', async () => {
    const editor = await open('lead-telluride.lattice.yaml')
    await settled(editor.document)
    await window.page.locator('[id="status.languageStatus"]').hover()
    const item = window.page.locator('.hover-language-status', { hasText: 'cF' }).first()
    await item.waitFor()
    assert.match((await item.textContent()) ?? '', /1 error/)
    await window.picture('status')
  })
})
