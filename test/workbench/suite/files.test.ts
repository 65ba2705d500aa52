import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { api, closeAll, file, open, set, shown } from './support.ts'

describe('whose file it is', () => {
  afterEach(closeAll)

  it('a YAML file of someone else is left alone', async () => {
    const { document } = await open('services.yaml')
    assert.strictEqual(document.languageId, 'yaml')
    // The server must have been told of it to answer, and to have a finding; it has not.
    assert.strictEqual(await (await api()).checked(document.uri), undefined)
    assert.deepStrictEqual(vscode.languages.getDiagnostics(document.uri), [])
  })

  it('both endings count', async () => {
    await vscode.workspace.fs.copy(file('lead-telluride.lattice.yaml'), file('short-ending.lattice.yml'))
    const { document } = await open('short-ending.lattice.yml')
    assert.strictEqual(document.languageId, 'braggline')
    await shown(document.uri, 'path-label-unknown', 1)
  })

  it('a lattice file is checked where all *.yaml are given to YAML', async () => {
    await set('files', 'associations', { '*.yaml': 'yaml' })
    try {
      await vscode.workspace.fs.copy(file('lead-telluride.lattice.yaml'), file('associated.lattice.yaml'))
      const { document } = await open('associated.lattice.yaml')
      assert.strictEqual(document.languageId, 'yaml')
      const [finding] = await shown(document.uri, 'path-label-unknown', 1)
      assert.strictEqual(document.getText(finding.range), 'Ww')
    } finally {
      await set('files', 'associations', undefined)
    }
  })

  it('a text that has no file yet is checked', async () => {
    const content = 'lattice: {bravais: cF, a: 5.43}\npath: Γ – Xx\n'
    const document = await vscode.workspace.openTextDocument({ language: 'braggline', content })
    await vscode.window.showTextDocument(document)
    const [finding] = await shown(document.uri, 'path-label-unknown', 1)
    assert.strictEqual(document.getText(finding.range), 'Xx')
  })
})
