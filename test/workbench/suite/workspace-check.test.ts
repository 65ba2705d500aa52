import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { closeAll, file, open, replace, ruleOf, set, shown, soon } from './support.ts'

const RULE = 'path-label-unknown'
const WRONG = 'lattice: {bravais: cF, a: 5.43}\npath: Γ – Xx\nchecks: {path-misses: off}\n'
const RIGHT = WRONG.replace('Xx', 'X')
const write = (name: string, text: string) =>
  vscode.workspace.fs.writeFile(file(name), new TextEncoder().encode(text))
const found = (name: string) =>
  vscode.languages.getDiagnostics(file(name)).filter(each => ruleOf(each) === RULE)
const checkAll = () => vscode.commands.executeCommand<Total>('braggline.checkAll')
interface Total {
  files: number
  errors: number
  cancelled: boolean
}

describe('Check All Lattice Files', () => {
  beforeEach(async () => {
    await write('all/wrong.lattice.yaml', WRONG)
    await write('all/right.lattice.yml', RIGHT)
  })
  afterEach(async () => {
    await closeAll()
    await vscode.commands.executeCommand('workbench.action.closeAllEditors')
    await vscode.commands.executeCommand('braggline.clearChecks')
    await vscode.workspace.fs.delete(file('all'), { recursive: true })
    await set('braggline', 'checks', undefined)
  })

  it('files that no editor shows have their findings in Problems until they are cleared', async () => {
    assert.strictEqual(found('all/wrong.lattice.yaml').length, 0)
    const total = await checkAll()
    assert.strictEqual(total.files, (await vscode.workspace.findFiles('**/*.lattice.{yaml,yml}')).length)
    assert.strictEqual(found('all/wrong.lattice.yaml').length, 1)
    assert.strictEqual(found('all/right.lattice.yml').length, 0)
    const [finding] = found('all/wrong.lattice.yaml')
    assert.strictEqual(finding.source, 'braggline')
    assert.deepStrictEqual([finding.range.start.line, finding.range.start.character], [1, 10])
    await vscode.commands.executeCommand('braggline.clearChecks')
    assert.strictEqual(found('all/wrong.lattice.yaml').length, 0)
  })

  it('a file that is opened has its findings once, and keeps them when it is closed', async () => {
    await checkAll()
    const editor = await open('all/wrong.lattice.yaml')
    await shown(editor.document.uri, RULE, 1)
    await replace(editor, 'Xx', 'X')
    await shown(editor.document.uri, RULE, 0)
    await closeAll()
    // The edit was not saved.
    await shown(file('all/wrong.lattice.yaml'), RULE, 1)
  })

  it('what changes, comes or goes on disk is followed', async () => {
    await checkAll()
    await write('all/wrong.lattice.yaml', RIGHT)
    await shown(file('all/wrong.lattice.yaml'), RULE, 0)
    await write('all/right.lattice.yml', WRONG)
    await shown(file('all/right.lattice.yml'), RULE, 1)
    await write('all/new.lattice.yaml', WRONG)
    await shown(file('all/new.lattice.yaml'), RULE, 1)
    await vscode.workspace.fs.delete(file('all/new.lattice.yaml'))
    await shown(file('all/new.lattice.yaml'), RULE, 0)
  })

  it('renamed files and folders take their findings with them', async () => {
    await checkAll()
    const rename = async (from: string, to: string) => {
      const edit = new vscode.WorkspaceEdit()
      edit.renameFile(file(from), file(to))
      assert.ok(await vscode.workspace.applyEdit(edit))
    }
    await rename('all/wrong.lattice.yaml', 'all/other.lattice.yaml')
    await shown(file('all/other.lattice.yaml'), RULE, 1)
    await shown(file('all/wrong.lattice.yaml'), RULE, 0)
    await rename('all', 'moved')
    await shown(file('moved/other.lattice.yaml'), RULE, 1)
    await shown(file('all/other.lattice.yaml'), RULE, 0)
    await vscode.workspace.fs.rename(file('moved'), file('all'))
    await shown(file('moved/other.lattice.yaml'), RULE, 0)
    await shown(file('all/other.lattice.yaml'), RULE, 1)
  })

  it('a folder that is deleted takes its findings with it', async () => {
    await write('gone/wrong.lattice.yaml', WRONG)
    await checkAll()
    assert.strictEqual(found('gone/wrong.lattice.yaml').length, 1)
    await vscode.workspace.fs.delete(file('gone'), { recursive: true })
    await shown(file('gone/wrong.lattice.yaml'), RULE, 0)
  })

  it('the settings hold for files that are not open too', async () => {
    await checkAll()
    await set('braggline', 'checks', { [RULE]: 'off' })
    await shown(file('all/wrong.lattice.yaml'), RULE, 0)
    await set('braggline', 'checks', { [RULE]: 'warning' })
    const [finding] = await shown(file('all/wrong.lattice.yaml'), RULE, 1)
    assert.strictEqual(finding.severity, vscode.DiagnosticSeverity.Warning)
  })

  it('ends when its findings are cleared', async () => {
    const text = (i: number) => `lattice: {bravais: oP, a: ${4 + i / 1000}, b: 4.2, c: 5.5}\npath: Γ – Xx\n`
    await Promise.all(Array.from({ length: 300 }, (_, i) => write(`all/${i}.lattice.yaml`, text(i))))
    const all = checkAll()
    await soon(() => vscode.languages.getDiagnostics(file('all/0.lattice.yaml')).length > 0)
    await vscode.commands.executeCommand('braggline.clearChecks')
    const total = await all
    assert.ok(total.cancelled)
    assert.strictEqual(found('all/0.lattice.yaml').length, 0)
  })

  it('a thousand files: an edit is answered meanwhile', async () => {
    const text = (i: number) =>
      `lattice: {bravais: oP, a: ${3 + i / 1000}, b: 4.2, c: 5.5}\natoms:\n  - Si: [0, 0, 0]\npath: Γ – Xx\n`
    await Promise.all(Array.from({ length: 1000 }, (_, i) => write(`all/${i}.lattice.yaml`, text(i))))
    await soon(async () => (await vscode.workspace.findFiles('all/*.lattice.yaml')).length === 1001)
    const editor = await open('silicon.lattice.yaml')
    await shown(editor.document.uri, RULE, 0)
    let ended = false
    const all = checkAll().then(total => {
      ended = true
      return total
    })
    await soon(() => vscode.languages.getDiagnostics(file('all/0.lattice.yaml')).length > 0)
    await replace(editor, 'W – K', 'Ww – K')
    await shown(editor.document.uri, RULE, 1)
    assert.ok(!ended, 'the check was over before the edit was answered')
    assert.ok((await all).files > 1000)
    assert.strictEqual(found('all/999.lattice.yaml').length, 1)
  })
})
