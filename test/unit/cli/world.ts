/** A world for the command line: a folder of its own, streams that are kept, no terminal unless asked for. */
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { dirname, join } from 'node:path'
import type { Symmetries } from '../../../server/src/cli/engine.ts'
import type { Io } from '../../../server/src/cli/io.ts'
import { run } from '../../../server/src/cli/run.ts'
import type { StartFileWorker } from '../../../server/src/cli/threads.ts'
import { fillForm } from '../../../server/src/exchange/forms/engine.ts'
import { loadSymmetryFromDisk } from '../../../server/src/symmetry-node.ts'
import { directSymmetry } from '../../../server/src/symmetry-service.ts'

export interface Outcome {
  readonly status: number
  readonly out: string
  readonly err: string
}

export interface Surroundings {
  readonly input?: string | Uint8Array
  readonly terminal?: boolean
  readonly env?: Record<string, string>
  /** Milliseconds that pass from one look at the clock to the next. */
  readonly slow?: number
  readonly symmetries?: Symmetries
  readonly startFileWorker?: StartFileWorker
}

export class World {
  readonly folder = mkdtempSync(join(tmpdir(), 'braggline-cli-'))

  path(name: string): string {
    return join(this.folder, name)
  }

  write(name: string, content: string | Uint8Array): this {
    mkdirSync(dirname(this.path(name)), { recursive: true })
    writeFileSync(this.path(name), content)
    return this
  }

  read(name: string): string {
    return readFileSync(this.path(name), 'utf8')
  }

  remove(): void {
    rmSync(this.folder, { recursive: true, force: true })
  }

  async run(args: readonly string[], around: Surroundings = {}): Promise<Outcome> {
    const written = { out: '', err: '' }
    let time = 0
    const stream = (name: 'out' | 'err') => ({
      write: (text: string) => {
        written[name] += text
      },
      isTerminal: around.terminal ?? false,
    })
    const io: Io = {
      cwd: this.folder,
      env: around.env ?? {},
      out: stream('out'),
      err: stream('err'),
      readInput: async () => Buffer.from(around.input ?? ''),
      startFileWorker: around.startFileWorker,
      now: () => (time += around.slow ?? 0),
      fillForm: async job => fillForm(job),
    }
    const status = await run(args, io, () => {
      loadSymmetryFromDisk()
      return around.symmetries ?? { ...directSymmetry, idle: async () => {} }
    })
    return { status, ...written }
  }
}
