import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { checked, closeAll, open, set } from './support.ts'
import { Window } from './window.ts'

describe('the lattice report, as it is seen', () => {
  let window: Window
  before(async function () {
    const connected = await Window.connect()
    if (!connected) return this.skip()
    window = connected
  })
  after(async () => {
    await set('workbench', 'colorTheme', undefined)
    await window?.close()
    await closeAll()
    await vscode.commands.executeCommand('workbench.action.closeAllEditors')
  })

  it('shows its figure and its tables in the preview', async () => {
    const editor = await open('lead-telluride.lattice.yaml')
    await checked(editor.document)
    await vscode.commands.executeCommand('braggline.openReport')
    const frame = window.page.frameLocator('iframe.webview.ready').frameLocator('iframe#active-frame')
    const figure = frame.locator('img[alt^="First Brillouin zone"]')
    await figure.waitFor()
    assert.ok(await figure.evaluate(image => (image as HTMLImageElement).naturalWidth > 100))
    assert.ok((await frame.locator('table').count()) >= 3)
    for (const [name, theme] of [
      ['light', 'Default Light Modern'],
      ['dark', 'Default Dark Modern'],
    ]) {
      await set('workbench', 'colorTheme', theme)
      await frame.locator(`body.vscode-${name}`).waitFor()
      await window.picture(`report-preview-${name}`)
    }
  })
})
