/** The zone view as a tab, in the desktop and in the browser edition. */
import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { checked, closeAll, open, soon } from './support.ts'

describe('zone view, as a tab', () => {
  afterEach(async () => {
    await vscode.commands.executeCommand('workbench.action.closeAllGroups')
    await closeAll()
  })
  const tabs = () => vscode.window.tabGroups.all.flatMap(group => group.tabs.map(({ label }) => label))
  const TITLE = 'Zone: lead-telluride'

  it('opens beside the text, once a file', async () => {
    const { document } = await open('lead-telluride.lattice.yaml')
    await checked(document)
    await vscode.commands.executeCommand('braggline.openZoneView')
    await soon(() => tabs().includes(TITLE))
    await vscode.window.showTextDocument(document, vscode.ViewColumn.One)
    await vscode.commands.executeCommand('braggline.openZoneView')
    assert.strictEqual(tabs().filter(label => label === TITLE).length, 1)
  })

  it('does nothing where no lattice file is edited', async () => {
    await open('services.yaml')
    await vscode.commands.executeCommand('braggline.openZoneView')
    assert.ok(!tabs().some(label => label.startsWith('Zone:')))
  })
})
