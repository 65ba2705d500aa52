import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { closeAll, EXTENSION, open, replace, settled, shown } from './support.ts'

describe('commands', () => {
  afterEach(closeAll)

  it('each one of the manifest is there', async () => {
    const known = new Set(await vscode.commands.getCommands())
    const { contributes } = vscode.extensions.getExtension(EXTENSION)!.packageJSON
    const promised = (contributes.commands as { command: string }[]).map(({ command }) => command)
    assert.ok(promised.length > 0)
    assert.deepStrictEqual(
      promised.filter(command => !known.has(command)),
      [],
    )
  })

  it('Restart Server: the findings come back, and new text is checked', async () => {
    const editor = await open('lead-telluride.lattice.yaml')
    await shown(editor.document.uri, 'path-label-unknown', 1)
    await vscode.commands.executeCommand('braggline.restartServer')
    await shown(editor.document.uri, 'path-label-unknown', 1)
    await replace(editor, 'Ww', 'W')
    await shown(editor.document.uri, 'path-label-unknown', 0)
    await settled(editor.document)
  })

  it('New Lattice File: a text without errors or warnings', async () => {
    await vscode.commands.executeCommand('braggline.newFile', 'cF')
    const { document } = vscode.window.activeTextEditor!
    assert.strictEqual(document.languageId, 'braggline')
    assert.ok(document.getText().includes('bravais: cF'), document.getText())
    const serious = (await settled(document)).filter(
      each => each.severity <= vscode.DiagnosticSeverity.Warning,
    )
    assert.deepStrictEqual(serious, [])
  })

  it("Insert Recommended Path: the book's own path in place of the file's", async () => {
    const editor = await open('silicon.lattice.yaml')
    await replace(editor, 'path: Γ – X – W – K – Γ – L – U – W – L – K | U – X', 'path: Γ – X')
    await vscode.commands.executeCommand('braggline.insertRecommendedPath')
    // W. Setyawan and S. Curtarolo, Comput. Mater. Sci. 49, 299 (2010), face-centred cubic: Γ–X–W–K–Γ–L–U–W–L–K|U–X.
    const line = editor.document
      .getText()
      .split('\n')
      .find(each => each.startsWith('path:'))
    assert.strictEqual(line, 'path: Γ – X – W – K – Γ – L – U – W – L – K | U – X')
    await vscode.commands.executeCommand('undo')
    assert.ok(editor.document.getText().includes('path: Γ – X\n'))
  })
  it('Rewrite for Supercell: lattice, atoms and path of the larger cell, undone in one step', async () => {
    const editor = await open('silicon.lattice.yaml')
    const before = editor.document.getText()
    await editor.edit(change =>
      change.insert(new vscode.Position(editor.document.lineCount, 0), 'supercell: [2, 1, 1]\n'),
    )
    await settled(editor.document)
    await vscode.commands.executeCommand('braggline.rewriteForSupercell')
    const after = editor.document.getText()
    assert.ok(!after.includes('supercell:'), after)
    assert.ok(after.includes('vectors:'), after)
    const atoms = (text: string) => text.split('\n').filter(line => /^ *- Si/.test(line)).length
    assert.strictEqual(atoms(after), 2 * atoms(before))
    await vscode.commands.executeCommand('undo')
    assert.ok(editor.document.getText().includes('supercell: [2, 1, 1]\n'))
  })
})
