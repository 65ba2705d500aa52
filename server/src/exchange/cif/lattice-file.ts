/** From a crystal of a CIF to the text of a lattice file. */
import { BRAVAIS, type BravaisType, type Centring, completeCell } from '../../crystal/bravais.ts'
import { PARAMETER_NAMES, type ParameterName } from '../../crystal/cell.ts'
import { latticeType, orderOf } from '../../crystal/lattice-type.ts'
import { reduce } from '../../crystal/reduction.ts'
import { spaceGroupType } from '../../crystal/symmetry-library.ts'
import { bravaisOf, compactSymbol } from '../../crystal/space-group.ts'
import {
  combine,
  determinant,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  scale,
  type Vec3,
} from '../../crystal/vector.ts'
import { scalarText } from '../../format/edits.ts'
import { evaluate, formatFraction, formatNumber, recogniseFraction } from '../../format/numbers.ts'
import { harmless, wrap as wrapWords } from '../layout.ts'
import { isUnit, wrap } from './operations.ts'
import type { CifCrystal, Remark } from './read.ts'
import type { Basis } from './sites.ts'
import { type CifNumber, shown } from './syntax.ts'

/** How the lattice is written, and how fractions of the CIF's cell become the file's. */
interface Statement {
  readonly lines: readonly string[]
  /** Rows: the axes that the file's fractions refer to, on those of the CIF's cell. */
  readonly axes: Mat3
  readonly atomsFrame?: 'primitive'
  readonly remark?: string
}

/** P 1 in a CIF mostly means that every atom is listed, whatever their symmetry: it is no claim to be checked. */
const NO_SYMMETRY = 1
const WIDTH = 100
const TITLE_LENGTH = 120

/** @param source what the CIF is called. */
export function latticeFileText(
  crystal: CifCrystal,
  basis: Basis,
  source: string,
  remarks: readonly Remark[],
): string {
  const statement = stateLattice(crystal)
  const { group, symbol } = crystal
  const told = statement.remark
    ? [...remarks, { level: 'note' as const, message: statement.remark }]
    : remarks
  const title = harmless(crystal.title ?? crystal.block).slice(0, TITLE_LENGTH)
  return `${[
    ...comment(`Imported from ${source}, data block ${crystal.block}.`),
    ...crystal.facts.flatMap(fact => comment(`${fact}.`)),
    ...told.flatMap(({ level, message }) =>
      comment(`${level === 'loss' ? 'Not as in the CIF' : 'Note'}: ${message}.`),
    ),
    ...(title.trim() ? [`title: ${scalarText(title.trim())}`] : []),
    'lattice:',
    ...statement.lines.map(line => `  ${line}`),
    ...(statement.atomsFrame ? ['frames:', `  atoms: ${statement.atomsFrame}`] : []),
    ...(basis.atoms.length > 0 ? ['atoms:', ...atomLines(basis, statement)] : []),
    ...(group && group !== NO_SYMMETRY
      ? [`space-group: ${group} # ${symbol ? plain(symbol) : compactSymbol(spaceGroupType(group).symbol)}`]
      : []),
    'labels: setyawan-curtarolo-2010',
    'path: recommended',
  ].join('\n')}\n`
}

const comment = (text: string): string[] => wrapWords(plain(text), WIDTH - 2).map(line => `# ${line}`)
/** On one line, and nothing that the reader of the file takes for an order to itself (`braggline: allow`). */
const plain = (text: string): string =>
  harmless(text)
    .replace(/\s+/g, ' ')
    .replace(/braggline:/gi, 'braggline')
    .trim()

function atomLines({ atoms }: Basis, { axes }: Statement): string[] {
  const toFile = inverse(axes)
  return atoms.map(({ site, position }) => {
    const digits = Math.min(MOST_DIGITS, Math.max(LEAST_DIGITS, Math.max(...site.decimals) + 2))
    const numbers = wrap(combine(position, toFile)).map(x => coordinate(x, digits))
    return `  - ${scalarText(site.element)}: [${numbers.join(', ')}] # ${plain(shown(site.label))}`
  })
}

/** Six digits place an atom of a cell of 100 Å within a tenth of the tolerance; thirds added to a number take two more. */
const LEAST_DIGITS = 6
const MOST_DIGITS = 12
/** A number that went through a matrix or two differs from the exact one by less. */
const SAME = 1e-9
/** Fractions that special positions have; other numbers stay decimals, as the CIF wrote them. */
const SPECIAL_DENOMINATORS = [1, 2, 3, 4, 6, 8, 12, 24]

function coordinate(x: number, digits: number): string {
  const found = recogniseFraction(x, SAME)
  if (found && SPECIAL_DENOMINATORS.includes(found.q)) return formatFraction(found)
  const text = formatNumber(x, digits)
  return text === '1' ? '0' : text
}

// The lattice.

function stateLattice(crystal: CifCrystal): Statement {
  const { operations, cell } = crystal
  const translations = operations.filter(({ rotation }) => isUnit(rotation)).map(o => o.translation)
  const centring = centringOf(translations)
  const rotations = [...new Map(operations.map(o => [o.rotation.join(), o.rotation])).values()]
  const type = centring && typeOf(rotations, centring === 'reverse' ? 'R' : centring)
  if (type) {
    const misfit = unfitting(type, cell)
    if (!misfit) return byType(type, centring === 'reverse', cell)
    const remark = `the cell's parameters do not fit ${BRAVAIS[type.bravais].words}: ${misfit}; the lattice is stated by vectors`
    if (centring !== 'reverse') return byVectors(crystal.rows, centring, remark)
    return byPrimitiveVectors(crystal.rows, translations, remark)
  }
  const other = inUsualAxes(crystal, translations)
  if (other) return other
  if (centring && centring !== 'reverse')
    return byVectors(
      crystal.rows,
      centring,
      "the CIF's setting has no Bravais type of its own here: its cell is stated by vectors",
    )
  return byPrimitiveVectors(
    crystal.rows,
    translations,
    `the CIF's cell holds ${translations.length} lattice points in a way that has no centring letter: a primitive cell is stated instead`,
  )
}

interface FoundType {
  readonly bravais: BravaisType
  readonly free: readonly ParameterName[]
  readonly rhombohedral?: boolean
}

/** The Bravais type in whose conventional setting the rotations are; undefined in another one. */
function typeOf(rotations: readonly Mat3[], centring: Centring): FoundType | undefined {
  // −W is as good as W for the lattice; its proper one tells the axis.
  const turns = rotations.map(W => (determinant(W) > 0 ? W : mapMatrix(W, x => -x + 0)))
  const orders = turns.map(orderOf)
  const most = Math.max(...orders)
  const threefold = new Set(turns.filter((_, i) => orders[i] === 3).map(W => W.join())).size / 2
  const twofold = new Set(turns.filter((_, i) => orders[i] === 2).map(W => W.join())).size
  const isPermutation = turns.every(W => W.every(row => row.filter(x => x !== 0).length === 1))
  const found = (bravais: string, free?: readonly ParameterName[]): FoundType | undefined =>
    bravais in BRAVAIS
      ? { bravais: bravais as BravaisType, free: free ?? BRAVAIS[bravais as BravaisType].free[0] }
      : undefined
  if (threefold === 4) return isPermutation ? found(`c${centring}`) : undefined
  if (most === 6 || most === 3) {
    const main = turns[orders.indexOf(most)]
    if (isAlong(main, [1, 1, 1]) && isPermutation && centring === 'P' && most === 3)
      return { bravais: 'hR', free: ['a', 'alpha'], rhombohedral: true }
    if (!isAlong(main, [0, 0, 1]) || isPermutation) return undefined
    return centring === 'R' ? found('hR', ['a', 'c']) : found(`h${centring}`)
  }
  if (most === 4) {
    const main = turns[orders.indexOf(4)]
    return isPermutation && isAlong(main, [0, 0, 1]) ? found(`t${centring}`) : undefined
  }
  const isDiagonal = turns.every(W => W.every((row, i) => row.every((x, j) => i === j || x === 0)))
  if (twofold === 3) return isDiagonal ? found(`o${centring}`) : undefined
  if (twofold === 1) {
    if (!isDiagonal) return undefined
    const main = turns[orders.indexOf(2)]
    const axis = [0, 1, 2].find(i => main[i][i] === 1)!
    const angle = (['alpha', 'beta', 'gamma'] as const)[axis]
    const type = found(`m${centring}`)
    const free = type && BRAVAIS[type.bravais].free.find(set => set.includes(angle))
    return free && { bravais: type.bravais, free }
  }
  return centring === 'P' ? found('aP') : undefined
}

const isAlong = (W: Mat3, v: Vec3): boolean =>
  W.every((row, i) => row[0] * v[0] + row[1] * v[1] + row[2] * v[2] === v[i])

/** Parameters are written with a few digits: below this part of one it is the reading of a decimal. */
const ROUNDING = 1e-9

/** What the type demands of the parameters that are not free, and does not get. */
function unfitting({ bravais, free, rhombohedral }: FoundType, cell: CifCrystal['cell']): string | undefined {
  const demanded = rhombohedral
    ? {
        a: cell.a.value,
        b: cell.a.value,
        c: cell.a.value,
        alpha: cell.alpha.value,
        beta: cell.alpha.value,
        gamma: cell.alpha.value,
      }
    : demandedCell(bravais, Object.fromEntries(free.map(name => [name, cell[name].value])))
  if (!demanded) return 'there is no such cell'
  const wrong = PARAMETER_NAMES.filter(
    name => Math.abs(cell[name].value - demanded[name]) > ROUNDING * demanded[name],
  )
  if (wrong.length === 0) return undefined
  return wrong.map(name => `${name} is ${cell[name].text} and not ${formatNumber(demanded[name])}`).join(', ')
}

function demandedCell(bravais: BravaisType, given: Partial<Record<ParameterName, number>>) {
  const completed = completeCell(bravais, given)
  return 'cell' in completed ? completed.cell : undefined
}

function byType(
  { bravais, free, rhombohedral }: FoundType,
  reverse: boolean,
  cell: CifCrystal['cell'],
): Statement {
  const lines = [`bravais: ${bravais}`, ...free.map(name => `${name}: ${numberText(cell[name])}`)]
  if (rhombohedral) return { lines, axes: IDENTITY, atomsFrame: 'primitive' }
  if (!reverse) return { lines, axes: IDENTITY }
  return {
    lines,
    axes: [
      [-1, 0, 0],
      [0, -1, 0],
      [0, 0, 1],
    ],
    remark:
      "the CIF's rhombohedral cell is in the reverse setting; a and b were turned round to the obverse one, x and y changed their signs",
  }
}

/** As the CIF wrote it, with the uncertainty, where the file's notation knows it. */
function numberText({ text, value }: CifNumber): string {
  const read = evaluate(text)
  return 'number' in read && read.number.value === value && !text.startsWith('+')
    ? text
    : formatNumber(value, MOST_DIGITS)
}

/** Å: the cell that is changed has its symmetry by the letter, so that nothing but arithmetic parts equal lengths. */
const SAME_LENGTH = 1e-7

/** In the conventional cell of the lattice, where that is of the type that the space group asks for. */
function inUsualAxes({ group, rows }: CifCrystal, translations: readonly Vec3[]): Statement | undefined {
  const fractions = primitiveFractions(translations)
  const right = determinant(fractions) > 0 ? fractions : mapMatrix(fractions, x => -x + 0)
  const type = latticeType(multiply(right, rows), 3, SAME_LENGTH)
  if (!group || !type?.bravais || type.bravais !== bravaisOf(spaceGroupType(group).lattice)) return undefined
  const axes = multiply(type.conventionalFromPrimitive, right)
  return {
    lines: [
      `bravais: ${type.bravais}`,
      ...BRAVAIS[type.bravais].free[0].map(
        name => `${name}: ${formatNumber(type.cell[name], VECTOR_DIGITS)}`,
      ),
    ],
    axes,
    remark: `the CIF's setting has no Bravais type of its own here; the usual cell was taken, whose vectors are ${axes.map(combinationText).join('; ')} of the CIF's cell`,
  }
}

/** `1/2 a − b` */
const combinationText = (row: Vec3): string =>
  row
    .flatMap((x, i) => {
      const factor = recogniseFraction(Math.abs(x), SAME)
      if (Math.abs(x) < SAME || !factor) return []
      const size = factor.p === factor.q ? '' : `${formatFraction(factor)} `
      return [`${x < 0 ? '−' : '+'} ${size}${'abc'[i]}`]
    })
    .join(' ')
    .replace(/^\+ /, '')
    .replace(/^− /, '−')

const VECTOR_DIGITS = 8
const vectorLines = (rows: readonly Vec3[]): string[] => [
  'vectors:',
  ...rows.map(
    row => `  - [${row.map(x => formatNumber(Math.abs(x) < 1e-10 ? 0 : x, VECTOR_DIGITS)).join(', ')}]`,
  ),
]

const byVectors = (rows: Mat3, centring: Centring, remark: string): Statement => ({
  lines: [...vectorLines(rows), ...(centring === 'P' ? [] : [`centring: ${centring}`])],
  axes: IDENTITY,
  remark,
})

function byPrimitiveVectors(rows: Mat3, translations: readonly Vec3[], remark: string): Statement {
  const fractions = primitiveFractions(translations)
  const { basis, change } = reduce(multiply(fractions, rows), 3)
  const axes = multiply(change, fractions)
  const isRight = determinant(basis) > 0
  const right = isRight ? axes : mapMatrix(axes, x => -x + 0)
  return { lines: vectorLines(multiply(right, rows)), axes: right, remark }
}

/** Translations of groups are whole multiples of this part of a cell vector. */
const STEPS = 48

/** A basis of the lattice that translations and cell vectors span, in fractions of the latter (Euclid's steps on rows). */
function primitiveFractions(translations: readonly Vec3[]): Mat3 {
  const rows = [
    ...translations.map(t => t.map(x => Math.round(x * STEPS))),
    ...IDENTITY.map(e => e.map(x => x * STEPS)),
  ]
  for (let column = 0; column < 3; column++)
    for (;;) {
      const live = rows.map((row, i) => ({ row, i })).filter(({ row, i }) => i >= column && row[column] !== 0)
      const least = live.reduce((p, q) => (Math.abs(q.row[column]) < Math.abs(p.row[column]) ? q : p))
      ;[rows[column], rows[least.i]] = [rows[least.i], rows[column]]
      if (live.length === 1) break
      for (let i = column + 1; i < rows.length; i++) {
        const times = Math.round(rows[i][column] / rows[column][column])
        rows[i] = rows[i].map((x, j) => x - times * rows[column][j])
      }
    }
  return rows.slice(0, 3).map(row => scale(row as unknown as Vec3, 1 / STEPS)) as unknown as Mat3
}

const CENTRING_POINTS: readonly (readonly [Centring | 'reverse', string])[] = [
  ['P', '0,0,0'],
  ['A', '0,0,0;0,3,3'],
  ['B', '0,0,0;3,0,3'],
  ['C', '0,0,0;3,3,0'],
  ['I', '0,0,0;3,3,3'],
  ['F', '0,0,0;0,3,3;3,0,3;3,3,0'],
  ['R', '0,0,0;2,4,4;4,2,2'],
  ['reverse', '0,0,0;2,4,2;4,2,4'],
]

/** By the lattice points of the cell in sixths; `reverse`: rhombohedral, in the setting that the file does not know. */
function centringOf(translations: readonly Vec3[]): Centring | 'reverse' | undefined {
  const points = translations.map(t => t.map(x => Math.round(x * 6 * 8) / 8).join()).sort()
  return CENTRING_POINTS.find(([, known]) => known === points.join(';'))?.[0]
}
