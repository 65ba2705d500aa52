/** Files written in a real window, with the keys that a person would press. */
import * as assert from 'node:assert'
import * as vscode from 'vscode'
import { closeAll, file, settled, soon } from './support.ts'
import { Window } from './window.ts'

/** How long a list may take to show a label, in ms. */
const PATIENCE = 15_000
/** Lists are walked no further than this. */
const FARTHEST = 12

describe('writing by completion', function () {
  this.timeout(90_000)
  let window: Window
  let keys = 0

  before(async function () {
    const connected = await Window.connect()
    if (!connected) return this.skip()
    window = connected
  })
  after(async () => {
    await window?.close()
  })
  beforeEach(() => {
    keys = 0
  })
  afterEach(closeAll)

  async function press(key: string, times = 1): Promise<void> {
    for (let i = 0; i < times; i++) await window.page.keyboard.press(key)
    keys += times
  }
  async function type(text: string): Promise<void> {
    await window.page.keyboard.type(text, { delay: 20 })
    keys += [...text].length
  }
  const list = () => window.page.locator('.suggest-widget.visible')

  /** Waits until the list shows what is wanted and takes it. */
  async function take(label: string): Promise<void> {
    const name = (row: string) => row.split(',')[0].trim()
    await list().locator(`.monaco-list-row[aria-label^="${label}"]`).first().waitFor({ timeout: PATIENCE })
    const focused = list().locator('.monaco-list-row.focused')
    for (let i = 0; i < FARTHEST; i++) {
      await focused.waitFor({ timeout: PATIENCE })
      const row = (await focused.getAttribute('aria-label')) ?? ''
      if (row.startsWith(label) && (name(row) === label || label.includes(' '))) break
      await press('ArrowDown')
    }
    await press('Enter')
    await list()
      .waitFor({ state: 'hidden', timeout: PATIENCE })
      .catch(() => undefined)
  }

  async function emptyFile(name: string): Promise<vscode.TextDocument> {
    await vscode.workspace.fs.writeFile(file(name), new Uint8Array())
    const document = await vscode.workspace.openTextDocument(file(name))
    await vscode.window.showTextDocument(document)
    await window.page.bringToFront()
    await window.page.locator('.editor-instance .monaco-editor').first().click()
    await settled(document)
    return document
  }

  async function isClean(document: vscode.TextDocument): Promise<void> {
    const found = await settled(document)
    assert.deepStrictEqual(
      found.map(({ message }) => message),
      [],
      document.getText(),
    )
  }

  it('a body-centred tetragonal crystal from its skeleton', async () => {
    const document = await emptyFile('skeleton.lattice.yaml')
    await type('body')
    await take('Body-centred tetragonal (tI)')
    await type('Test crystal')
    await press('Tab')
    await type('3.8')
    await press('Tab')
    await type('5.1')
    await press('Escape')
    await soon(() => document.getText().includes('c: 5.1'))
    assert.match(document.getText(), /bravais: tI\n {2}a: 3\.8\n {2}c: 5\.1\n/)
    await isClean(document)
    console.log(`a crystal from its skeleton: ${keys} keystrokes for ${document.getText().length} characters`)
  })

  it('the same piece by piece, its path label by label', async () => {
    const document = await emptyFile('pieces.lattice.yaml')
    await type('la')
    await take('lattice')
    await type('tI')
    await take('tI')
    await type('3.8')
    await press('Tab')
    await type('5.1')
    await press('Tab')
    await press('Escape')
    await press('Enter')
    await press('Backspace')
    await type('pat')
    await take('path')
    await take('Γ')
    // c > a: Γ–X–Y–Σ–Γ–Z–Σ₁–N–P–Y₁–Z|X–P (Setyawan and Curtarolo 2010, BCT2).
    for (const label of ['X', 'Y', 'Σ', 'Γ', 'Z', 'Σ1', 'N', 'P', 'Y1', 'Z']) {
      await type(' –')
      await type(' ')
      await take(label)
    }
    await type(' | ')
    await take('X')
    await type(' – ')
    await take('P')
    await soon(() => document.getText().trimEnd().endsWith('| X – P'))
    assert.match(document.getText(), /path: Γ – X – Y – Σ – Γ – Z – Σ1 – N – P – Y1 – Z \| X – P/)
    await isClean(document)
    console.log(`a crystal piece by piece: ${keys} keystrokes for ${document.getText().length} characters`)
  })

  it('a new file asks for its lattice and opens clean', async () => {
    void vscode.commands.executeCommand('braggline.newFile')
    const box = window.page.locator('.quick-input-widget')
    await box.locator('.monaco-list-row').first().waitFor({ timeout: PATIENCE })
    await type('hR-alpha')
    await soon(async () => (await box.locator('.monaco-list-row').count()) <= 2)
    await press('Enter')
    await soon(() => vscode.window.activeTextEditor?.document.getText().includes('bravais: hR'))
    const { document } = vscode.window.activeTextEditor!
    assert.match(document.getText(), /bravais: hR\n {2}a: \S+\n {2}alpha: /)
    await isClean(document)
  })
})
