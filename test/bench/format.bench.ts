import { decode, decodeWhole } from '../../server/src/format/decode.ts'
import type { DecodedFile } from '../../server/src/format/model.ts'
import { generatedFile } from './generate.ts'

/** One digit in the middle of the file changes between samples, as while typing. */
function times(read: (text: string) => DecodedFile, lines: number, rounds: number): number[] {
  const text = generatedFile(lines)
  const middle = text.indexOf('.', text.length >> 1) + 1
  const samples: number[] = []
  for (let i = -10; i < rounds; i++) {
    const edited = `${text.slice(0, middle)}${(i + 10) % 10}${text.slice(middle + 1)}`
    const started = performance.now()
    read(edited)
    if (i >= 0) samples.push(performance.now() - started)
  }
  return samples
}

export const benches = [
  ...[40, 400, 4000].map(lines => ({
    name: `decode: ${lines} lines`,
    unit: 'ms',
    run: () => times(decode, lines, lines > 1000 ? 50 : 200),
  })),
  {
    name: 'decode: 4000 lines, all of them through the YAML library',
    unit: 'ms',
    run: () => times(decodeWhole, 4000, 10),
  },
]
