import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { checked, closeAll, file, open, soon } from './support.ts'

const SALT = `data_salt
_cell_length_a 5.6402
_cell_length_b 5.6402
_cell_length_c 5.6402
_symmetry_space_group_name_H-M 'F m -3 m'
loop_
_atom_site_label
_atom_site_fract_x
_atom_site_fract_y
_atom_site_fract_z
Na1 0 0 0
Cl1 0.5 0.5 0.5
`
const write = (name: string, text: string) =>
  vscode.workspace.fs.writeFile(file(name), new TextEncoder().encode(text))

describe('CIF', () => {
  afterEach(async () => {
    await closeAll()
    await vscode.commands.executeCommand('workbench.action.closeAllEditors')
  })

  it('is imported as an unsaved lattice file of its name, which checks clean', async () => {
    await write('salt.cif', SALT)
    await vscode.commands.executeCommand('braggline.importCif', file('salt.cif'))
    await soon(() => vscode.window.activeTextEditor?.document.getText().includes('bravais: cF'))
    const { document } = vscode.window.activeTextEditor!
    assert.strictEqual(document.languageId, 'braggline')
    assert.ok(document.isDirty)
    assert.match(document.getText(), /- Cl: \[1\/2, 1\/2, 1\/2\] # Cl1/)
    assert.strictEqual((await checked(document)).findings, 0)
  })

  it('that is none leaves everything as it was', async () => {
    await write('broken.cif', SALT.replace('5.6402', "'open"))
    const before = vscode.workspace.textDocuments.length
    await vscode.commands.executeCommand('braggline.importCif', file('broken.cif'))
    assert.strictEqual(vscode.workspace.textDocuments.length, before)
  })

  it('is offered for export', async () => {
    const editor = await open('lead-telluride.lattice.yaml')
    await checked(editor.document)
    assert.ok((await vscode.commands.getCommands(true)).includes('braggline.exportCif'))
  })
})
