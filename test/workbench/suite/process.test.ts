import * as assert from 'node:assert'
import { readdirSync, readFileSync } from 'node:fs'
import * as vscode from 'vscode'
import { checked, closeAll, open, replace, shown } from './support.ts'

/** The server's process: a child of this one. Linux tells of processes in /proc. */
function serverProcess(): number | undefined {
  const numbers = readdirSync('/proc').filter(name => /^\d+$/.test(name))
  for (const number of numbers) {
    try {
      const arguments_ = readFileSync(`/proc/${number}/cmdline`, 'utf8')
      const parent = Number(/\) \S (\d+)/.exec(readFileSync(`/proc/${number}/stat`, 'utf8'))?.[1])
      if (parent === process.pid && /braggline.*server\.js/.test(arguments_)) return Number(number)
    } catch {
      // It has ended meanwhile.
    }
  }
  return undefined
}

describe('the server as a process', () => {
  before(function () {
    if (process.platform !== 'linux') this.skip()
  })
  afterEach(closeAll)

  it('is another one after a restart', async () => {
    await checked((await open('silicon.lattice.yaml')).document)
    const first = serverProcess()
    await vscode.commands.executeCommand('braggline.restartServer')
    const second = serverProcess()
    assert.ok(first !== undefined && second !== undefined)
    assert.notStrictEqual(first, second)
  })

  it('comes back when it is killed, and checks on', async () => {
    const editor = await open('lead-telluride.lattice.yaml')
    await shown(editor.document.uri, 'path-label-unknown', 1)
    const first = serverProcess()!
    process.kill(first, 'SIGKILL')
    while (serverProcess() === first || serverProcess() === undefined)
      await new Promise(done => setTimeout(done, 20))
    await replace(editor, 'Ww', 'W')
    await shown(editor.document.uri, 'path-label-unknown', 0)
  })
})
