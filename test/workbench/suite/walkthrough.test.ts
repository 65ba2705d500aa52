import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { closeAll, EXTENSION, replace, settled, shown, soon } from './support.ts'
import { Window } from './window.ts'

const STEPS = ['file', 'mend', 'zone', 'report', 'own']
const openWalkthrough = () =>
  vscode.commands.executeCommand('workbench.action.openWalkthrough', `${EXTENSION}#start`)

describe('the walkthrough', () => {
  let window: Window
  before(async function () {
    const connected = await Window.connect()
    if (!connected) return this.skip()
    window = connected
    // In a narrow editor the steps have no pictures.
    await vscode.commands.executeCommand('workbench.action.closeSidebar')
  })
  after(async () => {
    await vscode.workspace
      .getConfiguration('workbench')
      .update('colorTheme', undefined, vscode.ConfigurationTarget.Workspace)
    await window?.close()
  })
  afterEach(async () => {
    await closeAll()
    await vscode.commands.executeCommand('workbench.action.closeAllEditors')
  })

  const step = (name: string) => window.page.locator(`[data-step-id="${EXTENSION}#start#${name}"]`).first()
  const isDone = async (name: string) => (await step(name).locator('.complete').count()) > 0

  it('has five steps with pictures', async () => {
    for (const theme of ['Default Light Modern', 'Default Dark Modern']) {
      await vscode.workspace
        .getConfiguration('workbench')
        .update('colorTheme', theme, vscode.ConfigurationTarget.Workspace)
      for (const name of STEPS) {
        await openWalkthrough()
        // A step that is open already would close.
        if (!(await step(name).evaluate(each => each.classList.contains('expanded'))))
          await step(name).click()
        await window.page.locator('.getting-started-media:visible').first().waitFor()
        await new Promise(done => setTimeout(done, 700))
        await window.picture(`walkthrough-${name}-${theme.split(' ')[1].toLowerCase()}`)
      }
    }
  })

  it('its steps tick themselves off by what is done', async () => {
    await openWalkthrough()
    await step('mend').waitFor()
    assert.ok(!(await isDone('mend')))
    await vscode.commands.executeCommand('braggline.openSample')
    const editor = vscode.window.activeTextEditor!
    assert.ok(editor.document.isUntitled)
    assert.strictEqual(editor.document.languageId, 'braggline')
    await shown(editor.document.uri, 'path-label-unknown', 1)
    await replace(editor, 'Ww', 'W')
    assert.deepStrictEqual(await settled(editor.document), [])
    await vscode.commands.executeCommand('braggline.openSample', 'zone')
    await soon(() =>
      vscode.window.tabGroups.all.some(({ tabs }) => tabs.some(({ label }) => label.startsWith('Zone'))),
    )
    await vscode.commands.executeCommand('braggline.openSample', 'report')
    await soon(() =>
      vscode.window.tabGroups.all.some(({ tabs }) => tabs.some(({ label }) => label.endsWith(' report.md'))),
    )
    assert.strictEqual(
      vscode.workspace.textDocuments.filter(
        ({ isUntitled, languageId }) => isUntitled && languageId === 'braggline',
      ).length,
      1,
    )
    await openWalkthrough()
    for (const name of ['mend', 'zone', 'report']) await soon(() => isDone(name))
    await window.picture('walkthrough-done')
  })
})
