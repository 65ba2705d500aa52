import { type FoldJson, foldPoint } from '../exchange/fold.ts'
import { harmless, inColumns } from '../exchange/layout.ts'
import type { Vec3 } from '../crystal/vector.ts'
import { INVERSE_SYMBOL } from '../crystal/units.ts'
import { evaluate } from '../format/numbers.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { count, fractions, plain } from '../meaning/wording.ts'
import { documentsOf } from './engine.ts'
import { findFiles, readText, told } from './files.ts'
import { Refusal } from './io.ts'
import { ordinal } from './options.ts'
import { checkTarget, deliver } from './output.ts'
import { type Call, CLEAN, DOCUMENT, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

/** A point is written where another program's output is compared with it. */
const DIGITS = 6

export const fold: Verb = {
  name: 'fold',
  operands: 'FILE',
  summary: 'the equivalents of k-points in the first zone',
  about: [
    'Folds k-points by reciprocal vectors to the shortest equivalent, and tells in which zone they were.',
    "The numbers are in the file's own frame of k-points and may be written as in the file (1/3, sqrt(3)/2); the result is in fractions of the primitive reciprocal vectors.",
  ],
  options: [
    {
      name: 'at',
      value: '"k1,k2,k3"',
      repeatable: true,
      help: 'A k-point; may be given again for further ones.',
    },
    { name: 'format', value: 'FORMAT', choices: ['table', 'json'], help: 'table (the default) or json.' },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: ['braggline fold lead-telluride.lattice.yaml --at "3/4,0,0" --at "1/2,1/2,1"'],

  async run({ given, io, engine: start }: Call): Promise<number> {
    const output = given.value('output')
    checkTarget(output, given.has('overwrite'), io)
    const asked = given.values('at')
    if (asked.length === 0) throw new Refusal('no k-point is given: --at "k1,k2,k3"')
    const { names, failures } = await findFiles(given.operands, io)
    if (failures.length > 0) throw new Refusal(failures[0])
    if (names.length > 1) throw new Refusal(`fold takes one file; these are ${names.length}`)
    const [name] = names
    const read = await readText(name, io)
    if ('failure' in read) throw new Refusal(told(read))
    const documents = documentsOf(await start().check(read.text), harmless(name), ordinal(given, 'document'))
    if (documents.length > 1)
      throw new Refusal(
        `${harmless(name)} holds ${count(documents.length, 'crystal')}: pick one with --document N`,
      )
    const crystal = documents[0]?.crystal
    if (!crystal?.zone)
      throw new Refusal(`${harmless(name)} has no lattice that could be built; \`braggline check\` says why`)
    const folded = asked.map(text => foldPoint(crystal, point(text, crystal)))
    const known = folded.filter(one => one !== undefined)
    if (known.length < folded.length)
      throw new Refusal(`${harmless(name)}: the frame 2pi/a needs the lattice parameter a`)
    await deliver(
      given.value('format') === 'json' ? `${JSON.stringify(known, null, 2)}\n` : table(known, crystal),
      output,
      io,
    )
    return CLEAN
  },
}

/** The numbers of one `--at`, filled up with zeros along directions without a period. */
function point(text: string, { dimension, document }: Crystal): Vec3 {
  const parts = text.replace(/^\s*\[(.*)\]\s*$/s, '$1').split(',')
  const wanted = dimension === 3 ? 'three numbers' : dimension === 2 ? 'two numbers' : 'one number'
  if (parts.length !== dimension && parts.length !== 3)
    throw new Refusal(`--at "${harmless(text)}": a k-point of this crystal has ${wanted}, parted by commas`)
  const numbers = parts.map(part => {
    const result = evaluate(part.trim(), name => {
      const value = document.lattice?.parameters[name]?.value
      return value === undefined ? { fault: 'has no value in this file' } : { value }
    })
    if ('number' in result) return result.number.value
    throw new Refusal(
      `--at "${harmless(text)}": ${'fault' in result ? harmless(result.fault.message) : 'uses a number of the file that cannot be read'}`,
    )
  })
  if (numbers.slice(dimension).some(x => x !== 0))
    throw new Refusal(`--at "${harmless(text)}": a component stands along a direction without a period`)
  return [numbers[0], numbers[1] ?? 0, numbers[2] ?? 0]
}

function table(points: readonly FoldJson[], { unit, dimension }: Crystal): string {
  const rows = points.map(({ at, fraction, cartesian, length, place, zone, ties }) => [
    fractions(at, dimension),
    place,
    zone === null ? 'beyond 100,000' : String(zone),
    fractions(fraction, dimension),
    `(${cartesian.map(x => plain(x, DIGITS)).join(', ')})`,
    plain(length, DIGITS),
    String(ties),
  ])
  const head = ['at', 'place', 'zone', 'folded', `k (${INVERSE_SYMBOL[unit]})`, '|k|', 'ties']
  return `${inColumns([head, ...rows], ['left', 'left', 'right', 'left', 'left', 'right', 'right']).join('\n')}\n`
}
