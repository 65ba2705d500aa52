/** Forms, in the desktop and in the browser edition. */
import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { checked, closeAll, file, open, replace, soon } from './support.ts'

describe('forms', () => {
  afterEach(async () => {
    for (const name of ['silicon.lattice.yaml', 'forms/cell.txt.liquid', 'forms/_vector.liquid']) {
      await vscode.window.showTextDocument(await vscode.workspace.openTextDocument(file(name)))
      await vscode.commands.executeCommand('workbench.action.files.revert')
    }
    await vscode.commands.executeCommand('workbench.action.closeAllGroups')
    await closeAll()
  })

  const filled = () => vscode.workspace.textDocuments.find(({ uri }) => uri.scheme === 'braggline-form')
  const says = async (text: string) => {
    try {
      await soon(() => filled()?.getText() === text)
    } catch {
      // What it says instead is what one wants to know.
      assert.strictEqual(filled()?.getText(), text)
    }
  }
  const form = file('forms/cell.txt.liquid')
  // a = 5.431 Å in the fixture: a₁ = (0, a/2, a/2), and its path has ten segments.
  const SILICON = '# silicon\nfirst = 0.00, 2.72, 2.72\nsegments = 10\n'

  async function fill(): Promise<vscode.TextEditor> {
    const editor = await open('silicon.lattice.yaml')
    await checked(editor.document)
    await vscode.commands.executeCommand('braggline.fillForm', form)
    await says(SILICON)
    return editor
  }

  it('fills a form beside the text, named like what it makes', async () => {
    await fill()
    assert.strictEqual(filled()!.uri.path, '/silicon-cell.txt')
    const tab = vscode.window.tabGroups.all
      .flatMap(({ tabs }) => tabs)
      .find(({ label }) => label.includes('cell.txt'))
    assert.ok(tab && tab.group.viewColumn !== vscode.ViewColumn.One)
  })

  it('follows the lattice file, the form and its partials, saved or not', async () => {
    const editor = await fill()
    await replace(editor, 'path: Γ – X – W – K – Γ – L – U – W – L – K | U – X', 'path: Γ – X')
    await says(SILICON.replace('10', '1'))
    await replace(await open('forms/cell.txt.liquid'), 'segments = ', 'n = ')
    await says('# silicon\nfirst = 0.00, 2.72, 2.72\nn = 1\n')
    await replace(await open('forms/_vector.liquid'), 'fixed: 2', 'fixed: 1')
    await says('# silicon\nfirst = 0.0, 2.7, 2.7\nn = 1\n')
  })

  it('says in words and with its place what is wrong with the form, and saves nothing then', async () => {
    await fill()
    await replace(await open('forms/cell.txt.liquid'), 'path.segments', 'path.segmnts')
    await says(
      'This form cannot be filled.\n\ncell.txt.liquid:3:15: there is no `path.segmnts`; did you mean `path.segments`?\n',
    )
    await vscode.window.showTextDocument(filled()!)
    const target = file('never.txt')
    await vscode.commands.executeCommand('braggline.saveFilledForm', target)
    const files = await vscode.workspace.fs.readDirectory(file('.'))
    assert.ok(!files.some(([name]) => name === 'never.txt'))
  })

  it('is saved as it is shown', async () => {
    await fill()
    await vscode.window.showTextDocument(filled()!)
    const target = file('silicon-cell.txt')
    await vscode.commands.executeCommand('braggline.saveFilledForm', target)
    assert.strictEqual(new TextDecoder().decode(await vscode.workspace.fs.readFile(target)), SILICON)
    await vscode.workspace.fs.delete(target)
  })
})
