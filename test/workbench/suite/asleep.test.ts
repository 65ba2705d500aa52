import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { closeAll, EXTENSION, open } from './support.ts'

describe('a folder without lattice files', () => {
  after(closeAll)

  it('does not wake the extension, nor does a YAML file in it', async () => {
    const { document } = await open('services.yaml')
    assert.strictEqual(document.languageId, 'yaml')
    // The outline of YAML comes from an extension that this file does wake: once it has answered, ours had its chance.
    await vscode.commands.executeCommand('vscode.executeDocumentSymbolProvider', document.uri)
    assert.strictEqual(vscode.extensions.getExtension(EXTENSION)?.isActive, false)
  })

  it('a lattice file wakes it', async () => {
    const document = await vscode.workspace.openTextDocument({ language: 'braggline', content: 'unit: nm\n' })
    const extension = vscode.extensions.getExtension(EXTENSION)!
    for (let tries = 0; !extension.isActive && tries < 200; tries++)
      await new Promise(done => setTimeout(done, 25))
    assert.strictEqual(extension.isActive, true, document.languageId)
  })
})
