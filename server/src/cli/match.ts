import { IN_ANGSTROM, UNITS, type Unit } from '../crystal/units.ts'
import { norm, spanned, type Vec3 } from '../crystal/vector.ts'
import { type KList, type ListColumns, readKList, readVectors } from '../exchange/k-list.ts'
import { matchList, type MatchJson, unitThatFits } from '../exchange/match.ts'
import { matchText } from '../exchange/match-text.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { count } from '../meaning/wording.ts'
import { STANDARD_INPUT } from './files.ts'
import { type Io, Refusal } from './io.ts'
import { type Given, ordinal } from './options.ts'
import { Desk } from './output.ts'
import { oneCrystal } from './pick.ts'
import { listText } from './probe.ts'
import { type Call, CLEAN, DOCUMENT, FOUND, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

export const match: Verb = {
  name: 'match',
  operands: 'FILE LIST',
  summary: "whether a list of k-points is this file's path or mesh, and in which frame and unit",
  about: [
    'LIST is what stands in the input or output of a job: three numbers a line, then perhaps a weight, perhaps # and a label; - is standard input. It is tried as fractions of the primitive and of the conventional reciprocal vectors, as Cartesian in inverse Å, bohr and nm, and in 2π/a, with the 2π and without. How far a point may be off follows from the digits of the list.',
    "With --vectors the cell that the job used is compared with the file's: the whole-numbered matrix, the rotation and the strain between them; the list is then also read along that cell. LIST may be left out.",
    "Exit status: 0 where it is this file's path or mesh (and cell), 1 where it is not, 2 where the work could not be done.",
  ],
  options: [
    {
      name: 'columns',
      value: '"2,3,4"',
      help: 'The columns of the components, from 1; the first ones by default.',
    },
    {
      name: 'weight-column',
      value: 'N',
      help: 'The column of the weight; by default the next after the first ones.',
    },
    { name: 'vectors', value: 'LIST', help: "The vectors of the job's cell, three numbers a line." },
    {
      name: 'vectors-unit',
      value: 'UNIT',
      choices: [...UNITS],
      help: "Their unit: angstrom, nm or bohr; the file's own by default.",
    },
    { name: 'format', value: 'FORMAT', choices: ['text', 'json'], help: 'text (the default) or json.' },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: [
    'braggline match lead-telluride.lattice.yaml k-points.txt',
    'braggline match pbte.lattice.yaml job.out --columns "2,3,4" --vectors cell.txt --vectors-unit bohr',
  ],

  async run({ given, io, engine }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const [file, list, more] = given.operands
    const vectors = given.value('vectors')
    if (file === undefined || (list === undefined && vectors === undefined))
      throw new Refusal('a file and a list are wanted: FILE LIST')
    if (more !== undefined)
      throw new Refusal(`one file and one list are taken; these are ${given.operands.length}`)
    if ([file, list, vectors].filter(name => name === STANDARD_INPUT).length > 1)
      throw new Refusal('standard input can be one of file, list and vectors only')
    if (given.has('vectors-unit') && vectors === undefined)
      throw new Refusal('--vectors-unit says the unit of --vectors, which is not given')
    const crystal = await oneCrystal({ ...given, operands: [file] }, io, engine)
    const columns = columnsOf(given, crystal.dimension!)
    const read = list === undefined ? undefined : await pointsOf(list, columns, crystal, io)
    const job = vectors === undefined ? undefined : await vectorsOf(vectors, given, crystal, io)
    const found = matchList(crystal, read?.list, job)
    const better =
      read && !found.matches && !given.has('columns')
        ? otherColumns(read, crystal).find(one => matchList(crystal, one.list, job).matches)
        : undefined
    const fitsIn = job && unitThatFits(crystal, job, unitOf(given, crystal), given.has('vectors-unit'))
    const result: MatchJson = {
      ...found,
      ...(better && {
        nearest: `read from its columns ${better.columns.join(', ')} the list matches: ${optionOf(better)}`,
      }),
      ...(fitsIn && { matches: list !== undefined && found.matches, cell: { related: false, fitsIn } }),
    }
    const cellFits = result.cell?.related ?? true
    desk.result(
      given.value('format') === 'json'
        ? `${JSON.stringify(result, null, 2)}\n`
        : matchText(list === STANDARD_INPUT ? 'The list' : (list ?? ''), result),
    )
    await desk.close()
    return result.matches && cellFits ? CLEAN : FOUND
  },
}

function columnsOf(given: Given, dimension: number): ListColumns {
  const weight = ordinal(given, 'weight-column')
  const text = given.value('columns')
  if (text === undefined) return { weight }
  const columns = text.split(/[\s,]+/).filter(word => word !== '')
  if (columns.length < dimension || columns.length > 3 || !columns.every(word => /^[1-9]\d{0,3}$/.test(word)))
    throw new Refusal(
      `--columns "${text}": ${count(dimension, 'column')} from 1 are wanted, parted by commas`,
    )
  return { columns: columns.map(Number), weight }
}

const unitOf = (given: Given, { unit }: Crystal): Unit =>
  (given.value('vectors-unit') as Unit | undefined) ?? unit

const shownName = (name: string): string => (name === STANDARD_INPUT ? 'standard input' : name)

interface Read {
  readonly text: string
  readonly list: KList
}
interface ReadFrom {
  readonly columns: readonly number[]
  readonly list: KList
}

async function pointsOf(name: string, columns: ListColumns, crystal: Crystal, io: Io): Promise<Read> {
  const text = await listText(name, io)
  const list = readKList(text, crystal.dimension!, columns)
  if (!('fault' in list)) return { text, list }
  const [other] = columns.columns ? [] : otherColumns({ text }, crystal)
  const hint = other ? `; its columns ${other.columns.join(', ')} have them: ${optionOf(other)}` : ''
  throw new Refusal(`${shownName(name)}: ${list.fault}${hint}`)
}

/** Where the components may stand behind an ordinal, a label or words of a job's output. */
const FIRST_COLUMNS = [2, 3, 4, 5, 6, 7]
/** A longer list is read as it was asked for only. */
const LONG = 5000

/** The list read from later columns, where these hold numbers on at least as many lines as the first ones. */
function otherColumns({ text, list }: Partial<Read> & { text: string }, { dimension }: Crystal): ReadFrom[] {
  if (list && list.count > LONG) return []
  return FIRST_COLUMNS.flatMap(first => {
    const columns = [first, first + 1, first + 2].slice(0, dimension)
    const other = readKList(text, dimension!, { columns })
    return 'fault' in other || other.count < (list?.count ?? 1) ? [] : [{ columns, list: other }]
  })
}

const optionOf = ({ columns }: ReadFrom): string => `--columns "${columns.join(',')}"`

async function vectorsOf(name: string, given: Given, crystal: Crystal, io: Io): Promise<readonly Vec3[]> {
  const rows = readVectors(await listText(name, io), crystal.dimension!)
  if ('fault' in rows) throw new Refusal(`${shownName(name)}: ${rows.fault}`)
  const size = IN_ANGSTROM[unitOf(given, crystal)] / crystal.angstrom
  const vectors = rows.slice(0, crystal.dimension).map(row => row.map(x => x * size) as unknown as Vec3)
  if (!(spanned(vectors) > FLAT * vectors.reduce((product, v) => product * norm(v), 1)))
    throw new Refusal(`${shownName(name)}: the vectors span no cell`)
  return vectors
}
/** Of the product of the lengths: numbers with a few digits leave more of a flat cell. */
const FLAT = 1e-9
