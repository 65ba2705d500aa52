import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { closeAll, open, settled, soon } from './support.ts'

const HALF = '0.0 0.5 0.5\n0.5 0.0 0.5\n0.5 0.5 0.0\n'
const paste = () => vscode.commands.executeCommand('braggline.pasteLattice')

/** Accepts the quick pick as soon as it is there, as the Enter key does. */
async function accept(done: () => boolean): Promise<void> {
  await soon(async () => {
    if (done()) return true
    await vscode.commands.executeCommand('workbench.action.acceptSelectedQuickOpenItem')
    return done()
  })
}

describe('Paste Vectors as Lattice', () => {
  afterEach(closeAll)

  it('replaces the lattice once that has been agreed to, and can be undone', async () => {
    await vscode.env.clipboard.writeText(`lattice vectors (Å)\n5.431\n${HALF}`)
    const editor = await open('lead-telluride.lattice.yaml')
    const before = editor.document.getText()
    const pasted = paste()
    await accept(() => editor.document.getText() !== before)
    await pasted
    assert.match(
      editor.document.getText(),
      /\nlattice:\n {2}bravais: cF\n {2}a: 5\.431\n {2}vectors:\n {4}- \[0, a\/2, a\/2\]\n/,
    )
    assert.match(editor.document.getText(), /\natoms:\n {2}- Pb/)
    await vscode.commands.executeCommand('undo')
    assert.strictEqual(editor.document.getText(), before)
  })

  it('leaves the file alone where the quick pick is closed', async () => {
    await vscode.env.clipboard.writeText(HALF.replaceAll('0.5', '2.7'))
    const editor = await open('lead-telluride.lattice.yaml')
    const before = editor.document.getText()
    let ended = false
    const pasted = paste().then(() => {
      ended = true
    })
    await soon(async () => {
      if (!ended) await vscode.commands.executeCommand('workbench.action.closeQuickOpen')
      return ended
    })
    await pasted
    assert.strictEqual(editor.document.getText(), before)
  })

  it('begins a new file where none is open', async () => {
    await vscode.commands.executeCommand('workbench.action.closeAllEditors')
    await vscode.env.clipboard.writeText(`in bohr\n10.263\n${HALF}`)
    const pasted = paste()
    await accept(() => vscode.window.activeTextEditor?.document.languageId === 'braggline')
    await pasted
    const { document } = vscode.window.activeTextEditor!
    assert.match(document.getText(), /^unit: bohr\nlattice:\n {2}bravais: cF\n {2}a: 10\.263\n/)
    assert.deepStrictEqual(
      (await settled(document)).filter(({ severity }) => severity === vscode.DiagnosticSeverity.Error),
      [],
    )
  })

  it('does nothing with a clipboard that holds no vectors', async () => {
    await vscode.env.clipboard.writeText('Dear all, the cell will follow tomorrow.')
    const editor = await open('lead-telluride.lattice.yaml')
    const before = editor.document.getText()
    await paste()
    assert.strictEqual(editor.document.getText(), before)
  })
})
