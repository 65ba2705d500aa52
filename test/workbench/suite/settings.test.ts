import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { checked, closeAll, file, open, replace, set, shown } from './support.ts'

const RULE = 'path-label-unknown'

describe('settings take effect at once', () => {
  afterEach(async () => {
    await closeAll()
    await set('braggline', 'checks', undefined)
    await set('braggline', 'checkOn', undefined)
  })

  it('checks: a rule is turned off, made milder, and back', async () => {
    const { document } = await open('lead-telluride.lattice.yaml')
    await shown(document.uri, RULE, 1)
    await set('braggline', 'checks', { [RULE]: 'off' })
    await shown(document.uri, RULE, 0)
    await set('braggline', 'checks', { [RULE]: 'warning' })
    assert.strictEqual((await shown(document.uri, RULE, 1))[0].severity, vscode.DiagnosticSeverity.Warning)
    await set('braggline', 'checks', undefined)
  })

  it('checkOn: what is typed is checked when it is saved', async () => {
    await vscode.workspace.fs.copy(file('silicon.lattice.yaml'), file('saved.lattice.yaml'), {
      overwrite: true,
    })
    await set('braggline', 'checkOn', 'save')
    const editor = await open('saved.lattice.yaml')
    await shown(editor.document.uri, RULE, 0)
    await replace(editor, 'W – K', 'Ww – K')
    const before = vscode.languages.getDiagnostics(editor.document.uri).length
    // A request for findings would have gone out ahead of this one, and the server answers in order.
    assert.ok((await checked(editor.document)).findings > before)
    await shown(editor.document.uri, RULE, 0)
    await editor.document.save()
    await shown(editor.document.uri, RULE, 1)
  })
})
