import { Refusal } from './io.ts'
import { type Call, CLEAN, type Verb } from './verb.ts'

export const serve: Verb = {
  name: 'serve',
  operands: '--stdio',
  summary: 'the language server, for any editor that speaks the Language Server Protocol',
  about: ['Answers on standard output until its input ends.'],
  options: [{ name: 'stdio', help: 'Speak over standard input and output.' }],
  examples: ['braggline serve --stdio'],

  async run({ given }: Call): Promise<number> {
    if (!given.has('stdio'))
      throw new Refusal('serve speaks over standard input and output only: give --stdio')
    if (given.operands.length > 0) throw new Refusal('serve takes no file')
    const { serveStdio } = await import('../server-node.ts')
    serveStdio()
    return CLEAN
  },
}
