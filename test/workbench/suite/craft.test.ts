import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { closeAll, open, replace, set, settled, soon } from './support.ts'

/** Asks until the server, which may still be starting, has something to say. */
async function answered<T extends readonly unknown[]>(ask: () => Thenable<T | undefined>): Promise<T> {
  let answer: T | undefined
  await soon(async () => {
    answer = await ask()
    return (answer?.length ?? 0) > 0
  })
  return answer!
}

const run = <T>(command: string, ...given: unknown[]) => vscode.commands.executeCommand<T>(command, ...given)

const everything = ({ lineCount }: vscode.TextDocument) => new vscode.Range(0, 0, lineCount, 0)

describe('while one writes', () => {
  let editor: vscode.TextEditor
  const text = () => editor.document.getText()
  const placeOf = (word: string) => editor.document.positionAt(text().indexOf(word))

  before(async () => {
    editor = await open('colours.lattice.yaml')
    await settled(editor.document)
  })
  after(async () => {
    await set('braggline', 'codeLens', undefined)
    await set('braggline', 'inlayHints.volume', undefined)
    await closeAll()
  })

  it('a point is renamed wherever it stands', async () => {
    await replace(editor, 'K – Γ\n', 'K – Γ – Q\n')
    const edit = await run<vscode.WorkspaceEdit>(
      'vscode.executeDocumentRenameProvider',
      editor.document.uri,
      placeOf('Q: ['),
      'N',
    )
    assert.strictEqual(edit.get(editor.document.uri).length, 2)
    assert.ok(await vscode.workspace.applyEdit(edit))
    assert.ok(text().includes('  "N": [0.1, 0.2, 0]'), text())
    assert.ok(text().includes('K – Γ – N\n'), text())
  })

  it('a label of the book is not, and says why', async () => {
    const place = placeOf('Γ –(40)')
    await assert.rejects(
      async () => run('vscode.prepareRename', editor.document.uri, place),
      /Γ is a label of the book; define it under points to rename it\./,
    )
  })

  it('labels have colours of their own', async () => {
    const { uri } = editor.document
    const legend = await run<vscode.SemanticTokensLegend>('vscode.provideDocumentSemanticTokensLegend', uri)
    assert.deepStrictEqual(legend.tokenTypes, ['kpoint'])
    assert.deepStrictEqual(legend.tokenModifiers, ['declaration', 'defaultLibrary', 'outside', 'unknown'])
    const tokens = await run<vscode.SemanticTokens>('vscode.provideDocumentSemanticTokens', uri)
    // N under points, Γ M K Γ N in the path.
    assert.strictEqual(tokens.data.length, 5 * 6)
  })

  it('the whole is formatted', async () => {
    const { uri } = editor.document
    await replace(editor, 'unit: bohr', 'unit:   bohr')
    const edits = await run<vscode.TextEdit[]>('vscode.executeFormatDocumentProvider', uri, {
      tabSize: 2,
      insertSpaces: true,
    })
    const change = new vscode.WorkspaceEdit()
    change.set(uri, edits)
    assert.ok(await vscode.workspace.applyEdit(change))
    assert.ok(text().includes('\nunit: bohr\n'), text())
    assert.ok(text().includes('  - B: [1/3, 2/3, 0]\n'), text())
  })

  it('hints stand beside the text, until they are turned off', async () => {
    const { uri } = editor.document
    const ask = () =>
      run<vscode.InlayHint[]>('vscode.executeInlayHintProvider', uri, everything(editor.document))
    const labels = (await answered(ask)).map(({ label }) => String(label))
    assert.ok(
      labels.some(label => label.startsWith('volume ') && label.endsWith(' a₀³')),
      labels.join(),
    )
    await set('braggline', 'inlayHints.volume', false)
    await soon(async () => (await ask()).every(({ label }) => !String(label).startsWith('volume')))
  })

  it('a line above the path says what it comes to, until it is turned off', async () => {
    const { uri } = editor.document
    const ask = () => run<vscode.CodeLens[]>('vscode.executeCodeLensProvider', uri, 10)
    const titles = (await answered(ask)).map(({ command }) => command?.title ?? '')
    assert.ok(
      titles.some(title => /a₀⁻¹ in 3 segments · \d+ points/.test(title)),
      titles.join(),
    )
    assert.ok(titles.includes('write the recommended path'), titles.join())
    await set('braggline', 'codeLens', false)
    await soon(async () => (await ask()).length === 0)
  })

  it('names are found in all open files', async () => {
    const found = await answered(() =>
      run<vscode.SymbolInformation[]>('vscode.executeWorkspaceSymbolProvider', 'Every kind'),
    )
    assert.ok(
      found.some(({ name }) => name === 'Every kind of word'),
      found.map(({ name }) => name).join(),
    )
  })
})
