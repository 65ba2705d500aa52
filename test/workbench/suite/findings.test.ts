import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { checked, closeAll, open, ruleOf, settled, shown } from './support.ts'

const RULE = 'path-label-unknown'
const WRONG = 'path: Γ – X – Ww – K – Γ – L | U – X'
const RIGHT = 'path: Γ – X – W – K – Γ – L | U – X'

describe('a file with a mistake', () => {
  let editor: vscode.TextEditor
  const pathLine = () =>
    editor.document
      .getText()
      .split('\n')
      .find(line => line.startsWith('path:'))

  before(async () => {
    editor = await open('lead-telluride.lattice.yaml')
  })
  after(closeAll)

  it('belongs to the language', () => assert.strictEqual(editor.document.languageId, 'braggline'))

  it('has its squiggle on the right characters', async () => {
    const [finding] = await shown(editor.document.uri, RULE, 1)
    assert.strictEqual(editor.document.getText(finding.range), 'Ww')
    assert.strictEqual(finding.severity, vscode.DiagnosticSeverity.Error)
    assert.strictEqual(finding.source, 'braggline')
    assert.ok(finding.message.includes('Ww'), finding.message)
  })

  it('leads to the page of the rule', async () => {
    const [{ code }] = await shown(editor.document.uri, RULE, 1)
    assert.ok(typeof code === 'object')
    assert.ok(code.target.path.endsWith(`${RULE}.md`), code.target.path)
  })

  it('shows the reciprocal vectors under the mouse', async () => {
    const position = new vscode.Position(1, 2)
    const { uri } = editor.document
    const hovers = await vscode.commands.executeCommand<vscode.Hover[]>(
      'vscode.executeHoverProvider',
      uri,
      position,
    )
    const text = hovers
      .flatMap(({ contents }) => contents.map(part => (part as vscode.MarkdownString).value))
      .join('\n')
    // b = 2π/a (−1, 1, 1) and its like for the primitive cell of a face-centred cubic lattice; 2π/6.462 = 0.97233.
    for (const name of ['b₁', 'b₂', 'b₃']) {
      const row = text.split('\n').find(line => line.includes(name)) ?? ''
      assert.strictEqual(row.match(/0\.972\d*/g)?.length, 3, `${name} in: ${text}`)
    }
  })

  it('is mended by the fix, and the squiggle goes', async () => {
    const { uri } = editor.document
    const [finding] = await shown(uri, RULE, 1)
    const actions = await vscode.commands.executeCommand<vscode.CodeAction[]>(
      'vscode.executeCodeActionProvider',
      uri,
      finding.range,
      vscode.CodeActionKind.QuickFix.value,
    )
    // The command does not tell which finding an action belongs to; there is one at this range.
    const fix = actions.find(action => action.edit)
    assert.ok(fix, JSON.stringify(actions))
    await vscode.workspace.applyEdit(fix.edit!)
    assert.strictEqual(pathLine(), RIGHT)
    await shown(uri, RULE, 0)
    assert.ok((await settled(editor.document)).every(each => ruleOf(each) !== RULE))
  })

  it('has its finding again after undo', async () => {
    await vscode.commands.executeCommand('undo')
    assert.strictEqual(pathLine(), WRONG)
    const [finding] = await shown(editor.document.uri, RULE, 1)
    assert.strictEqual(editor.document.getText(finding.range), 'Ww')
  })

  it('has no finding left once it is closed', async () => {
    const { uri } = editor.document
    await closeAll()
    await shown(uri, RULE, 0)
  })
})

describe('the outline', () => {
  after(closeAll)

  it('lists the parts of the file in order', async () => {
    const { document } = await open('lead-telluride.lattice.yaml')
    const symbols = await vscode.commands.executeCommand<vscode.DocumentSymbol[]>(
      'vscode.executeDocumentSymbolProvider',
      document.uri,
    )
    const parts = symbols.map(({ name }) => name).filter(name => name !== 'title')
    assert.deepStrictEqual(parts, ['lattice', 'atoms', 'path', 'mesh'])
  })
})

describe('a file without a mistake', () => {
  after(closeAll)

  it('has neither errors nor warnings', async () => {
    const { document } = await open('silicon.lattice.yaml')
    const serious = (await settled(document)).filter(
      each => each.severity <= vscode.DiagnosticSeverity.Warning,
    )
    assert.deepStrictEqual(serious, [])
    assert.ok((await checked(document)).version >= document.version)
  })
})
