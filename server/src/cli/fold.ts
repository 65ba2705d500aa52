import { type FoldJson, foldPoint } from '../exchange/fold.ts'
import { supercellMap, supercellTable } from '../exchange/supercell-map.ts'
import { applyEdits } from '../format/edits.ts'
import { inColumns } from '../exchange/layout.ts'
import type { Vec3 } from '../crystal/vector.ts'
import { INVERSE_SYMBOL } from '../crystal/units.ts'
import { evaluate } from '../format/numbers.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { MOST_COPIES } from '../meaning/rewrite-copies.ts'
import { isWritable, restateForSupercell } from '../meaning/rewrite-supercell.ts'
import { supercellIn } from '../meaning/supercell-map.ts'
import { fractions, plain } from '../meaning/wording.ts'
import { Refusal } from './io.ts'
import { Desk } from './output.ts'
import { onePick, type Pick } from './pick.ts'
import { type Call, CLEAN, DOCUMENT, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

/** A point is written where another program's output is compared with it. */
const DIGITS = 6

export const fold: Verb = {
  name: 'fold',
  operands: 'FILE',
  summary: 'the equivalents of k-points in the first zone, or in that of the supercell',
  about: [
    'With --at, folds k-points by reciprocal vectors to the shortest equivalent, and tells in which zone they were.',
    "The numbers are in the file's own frame of k-points and may be written as in the file (1/3, sqrt(3)/2); the result is in fractions of the primitive reciprocal vectors.",
    "With --supercell, tells where the points of the file and of its label book come to lie in the zone of the file's supercell, which primitive points each point of that zone holds, and where the path meets its Γ.",
    'With --rewrite beside it, gives the file anew for its supercell: lattice by vectors, atoms copied, points, path and mesh at the same k where they can be.',
  ],
  options: [
    {
      name: 'at',
      value: '"k1,k2,k3"',
      repeatable: true,
      help: 'A k-point; may be given again for further ones.',
    },
    { name: 'supercell', help: "The map between the primitive zone and that of the file's supercell." },
    { name: 'rewrite', help: 'With --supercell: the lattice file of the supercell itself.' },
    { name: 'format', value: 'FORMAT', choices: ['table', 'json'], help: 'table (the default) or json.' },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: [
    'braggline fold lead-telluride.lattice.yaml --at "3/4,0,0" --at "1/2,1/2,1"',
    'braggline fold lead-telluride.lattice.yaml --supercell',
  ],

  async run({ given, io, engine: start }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const asked = given.values('at')
    const byMatrix = given.has('supercell')
    if (asked.length > 0 && byMatrix) throw new Refusal('--at and --supercell exclude each other')
    if (asked.length === 0 && !byMatrix)
      throw new Refusal('no k-point is given: --at "k1,k2,k3", or --supercell for the map of the supercell')
    if (given.has('rewrite') && !byMatrix) throw new Refusal('--rewrite goes with --supercell')
    if (given.has('rewrite') && given.has('format'))
      throw new Refusal('--rewrite gives a lattice file: it takes no --format')
    const pick = await onePick(given, io, start)
    const { crystal } = pick
    if (byMatrix) {
      if (!supercellIn(crystal)) throw new Refusal(withoutSupercell(crystal))
      if (given.has('rewrite')) desk.result(rewritten(pick, note => desk.note(`braggline: ${note}\n`)))
      else {
        const map = supercellMap(crystal)!
        desk.result(
          given.value('format') === 'json' ? `${JSON.stringify(map, null, 2)}\n` : supercellTable(map),
        )
      }
      await desk.close()
      return CLEAN
    }
    const folded = asked.map(text => {
      const one = foldPoint(crystal, point(text, crystal))
      if (!one) throw new Refusal('the frame 2pi/a of the file needs the lattice parameter a')
      return one
    })
    desk.result(
      given.value('format') === 'json' ? `${JSON.stringify(folded, null, 2)}\n` : table(folded, crystal),
    )
    await desk.close()
    return CLEAN
  },
}

/** The text with its document restated; what could not stay the same is told. */
function rewritten({ crystal, snapshot }: Pick, note: (text: string) => void): string {
  const restated = restateForSupercell(crystal, snapshot.text)
  if (!restated)
    throw new Refusal(
      isWritable(crystal)
        ? 'something that refers to the cell cannot be read, or stands behind an alias; nothing was written'
        : `the supercell would hold over ${MOST_COPIES} atoms; nothing was written`,
    )
  if (!restated.meshesKept)
    note('a mesh of the supercell has not the k-points of the primitive one: its steps are as fine, or finer')
  return applyEdits(snapshot.text, restated.edits)
}

const withoutSupercell = ({ document }: Crystal): string =>
  document.supercell
    ? 'the supercell of the file spans no cell; `braggline check` says why'
    : 'the file has no supercell: state it as `supercell: [2, 2, 2]` or by three rows'

/** The numbers of one `--at`, filled up with zeros along directions without a period. */
function point(text: string, { dimension, document }: Crystal): Vec3 {
  const parts = text.replace(/^\s*\[(.*)\]\s*$/s, '$1').split(',')
  const wanted = dimension === 3 ? 'three numbers' : dimension === 2 ? 'two numbers' : 'one number'
  if (parts.length !== dimension && parts.length !== 3)
    throw new Refusal(`--at "${text}": a k-point of this crystal has ${wanted}, parted by commas`)
  const numbers = parts.map(part => {
    const result = evaluate(part.trim(), name => {
      const value = document.lattice?.parameters[name]?.value
      return value === undefined ? { fault: 'has no value in this file' } : { value }
    })
    if ('number' in result) return result.number.value
    throw new Refusal(
      `--at "${text}": ${'fault' in result ? result.fault.message : 'uses a number of the file that cannot be read'}`,
    )
  })
  if (numbers.slice(dimension).some(x => x !== 0))
    throw new Refusal(`--at "${text}": a component stands along a direction without a period`)
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
