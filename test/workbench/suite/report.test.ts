import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { checked, closeAll, file, open, replace, soon } from './support.ts'

const SCHEME = 'braggline-report'
const tabs = () => vscode.window.tabGroups.all.flatMap(group => group.tabs)
const previews = () =>
  tabs().filter(
    ({ input, label }) =>
      input instanceof vscode.TabInputWebview && label.includes('lead-telluride report.md'),
  )
const reportUri = (source: vscode.Uri) =>
  vscode.Uri.from({ scheme: SCHEME, path: '/lead-telluride report.md', query: source.toString() })
const text = async (source: vscode.Uri) =>
  (await vscode.workspace.openTextDocument(reportUri(source))).getText()

describe('the lattice report', () => {
  afterEach(async () => {
    await closeAll()
    await vscode.commands.executeCommand('workbench.action.closeAllEditors')
  })

  it('opens beside the file, follows its edits, and is there once', async () => {
    const editor = await open('lead-telluride.lattice.yaml')
    await checked(editor.document)
    await vscode.commands.executeCommand('braggline.openReport')
    await soon(() => previews().length === 1)
    const [preview] = previews()
    assert.notStrictEqual(preview.group.viewColumn, editor.viewColumn)
    const before = await text(editor.document.uri)
    assert.match(before, /Bravais type: cF/)
    assert.match(before, /path-label-unknown/)
    assert.match(before, /data:image\/svg\+xml;base64,/)

    await vscode.window.showTextDocument(editor.document, editor.viewColumn)
    await replace(editor, 'Ww', 'W')
    await soon(async () => !(await text(editor.document.uri)).includes('path-label-unknown'))
    await vscode.commands.executeCommand('braggline.openReport')
    assert.strictEqual(previews().length, 1)
  })

  it('is not made anew while no tab shows it, and is up to date when one does', async () => {
    const editor = await open('lead-telluride.lattice.yaml')
    await checked(editor.document)
    await vscode.commands.executeCommand('braggline.openReport')
    await soon(() => previews().length === 1)
    // Whole, with what needed a search for symmetry: nothing is on its way any more.
    await soon(async () => /Fm-3m.*path-label-unknown/s.test(await text(editor.document.uri)))
    const column = previews()[0].group.viewColumn
    const other = await vscode.workspace.openTextDocument(file('services.yaml'))
    await vscode.window.showTextDocument(other, column)
    await soon(() => !previews()[0].isActive)
    const hidden = await text(editor.document.uri)
    await vscode.window.showTextDocument(editor.document, editor.viewColumn)
    await replace(editor, 'Ww', 'W')
    await checked(editor.document)
    // Longer than typing is left to come to rest.
    await new Promise(done => setTimeout(done, 1_000))
    assert.strictEqual(await text(editor.document.uri), hidden)
    await vscode.window.showTextDocument(other, column)
    await vscode.commands.executeCommand('workbench.action.closeActiveEditor')
    await soon(async () => !(await text(editor.document.uri)).includes('path-label-unknown'))
  })

  it('is saved as Markdown or as a page, in full', async () => {
    const { document } = await open('lead-telluride.lattice.yaml')
    const saved = async (name: string) => {
      await vscode.commands.executeCommand('braggline.saveReport', file(name))
      return new TextDecoder().decode(await vscode.workspace.fs.readFile(file(name)))
    }
    assert.match(await saved('saved-report.md'), /^# Lead telluride.*space group: Fm-3m.*data:image\/svg/s)
    assert.match(await saved('saved-report.html'), /^<!DOCTYPE html>.*<svg .*Fm-3m/s)
    // From the preview too, once it is in front.
    await vscode.commands.executeCommand('braggline.openReport')
    await soon(() => previews().length === 1)
    await vscode.commands.executeCommand('workbench.action.focusSecondEditorGroup')
    await soon(() => vscode.window.activeTextEditor === undefined)
    assert.match(await saved('saved-again.md'), /^# Lead telluride/)
    for (const name of ['saved-report.md', 'saved-report.html', 'saved-again.md'])
      await vscode.workspace.fs.delete(file(name))
    assert.ok(!document.isDirty)
  })

  it('may not be written to', async () => {
    const { document } = await open('lead-telluride.lattice.yaml')
    await checked(document)
    const report = await vscode.workspace.openTextDocument(reportUri(document.uri))
    await vscode.window.showTextDocument(report)
    await vscode.commands.executeCommand('type', { text: 'x' })
    assert.match(report.getText(), /^# Lead telluride/)
    assert.ok(!report.isDirty)
  })
})
