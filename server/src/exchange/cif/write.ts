/** A crystal as a CIF: cell, space group, the operations of that cell, independent atoms. Data names: CIF core dictionary. */
import { cellParameters } from '../../crystal/lattice.ts'
import {
  type Operation,
  settingOperations,
  spaceGroupSettings,
  spaceGroupType,
} from '../../crystal/symmetry-library.ts'
import { namedSpaceGroup } from '../../crystal/space-group.ts'
import {
  add,
  apply,
  subtract,
  combine,
  determinant,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  scale,
  transpose,
  type Vec3,
} from '../../crystal/vector.ts'
import { formatNumber } from '../../format/numbers.ts'
import type { Crystal, PlacedAtom } from '../../meaning/crystal.ts'
import { harmless, wrap as wrapWords } from '../layout.ts'
import {
  closed,
  groupNumber,
  IDENTITY_OPERATION,
  isUnit,
  metricMiss,
  operationKey,
  wrap,
  writeTriplet,
} from './operations.ts'

export type CifExport =
  | { readonly text: string; readonly notes: readonly string[] }
  | { readonly refusal: string }

export interface ExportOptions {
  /** What the lattice file is called. */
  readonly source: string
  /** Of the program, for `_audit_creation_method`. */
  readonly version: string
}

/** Å and degrees: lattice files are rarely more exact, and rounding must not break a cell's symmetry. */
const CELL_DIGITS = 8
const COORDINATE_DIGITS = 8
/** A longer list says nothing that a list of all atoms would not say better. */
const MOST_OPERATIONS = 192 * 4

/** The crystal must have a lattice. */
export function exportCif(crystal: Crystal, { source, version }: ExportOptions): CifExport {
  const { lattice, document, angstrom } = crystal
  if (!lattice) return { refusal: 'there is no lattice that could be built' }
  if (lattice.dimension === 1)
    return { refusal: 'a chain has one period, and a CIF describes crystals with three' }
  const height = document.lattice?.height?.value
  if (lattice.dimension === 2 && height === undefined)
    return {
      refusal:
        'a sheet needs a `height`, the period along its normal: a CIF describes crystals with three periods',
    }
  if (!crystal.atomsComplete) return { refusal: 'an atom could not be read' }
  const notes: string[] = []
  const rows = rowsOf(lattice.conventional, height)
  if (lattice.dimension === 2)
    notes.push('The crystal is a sheet: c is the period of the computing cell along its normal (`height`).')
  const symmetry = symmetryIn(crystal, rows, height, notes)
  const atoms = independentAtoms(crystal, rows, symmetry)
  const title = document.title?.value
  const lines = [
    ...comment(`From ${source}, document ${document.number}${title ? `: ${title}` : ''}.`),
    ...notes.flatMap(comment),
    `data_${blockName(title, document.number)}`,
    ...item('_audit_creation_method', `'Braggline ${version}'`),
    ...cellLines(rows, angstrom),
    ...formulaLines(crystal, rows),
    ...groupLines(symmetry.operations),
    ...loop(
      ['_space_group_symop_id', '_space_group_symop_operation_xyz'],
      symmetry.operations.map((operation, i) => [String(i + 1), writeTriplet(operation)]),
    ),
    ...atomLines(atoms, symmetry.isWhole),
  ]
  return { text: `${lines.join('\n')}\n`, notes }
}

/** The cell that is written: the file's conventional one, right-handed, of a sheet with its height. */
function rowsOf([a, b, c]: Mat3, height: number | undefined): Mat3 {
  const rows: Mat3 = [a, b, height === undefined ? c : scale(c, height)]
  // Only lengths and angles are written, which mean a right-handed cell: all three turned round have the same.
  return determinant(rows) > 0 ? rows : mapMatrix(rows, x => -x + 0)
}

interface WrittenSymmetry {
  /** On fractions of the written cell, identity first. */
  readonly operations: readonly Operation[]
  /** In fractions of the written cell: the file's origin was moved there. */
  readonly origin?: Vec3
  /** All of the crystal's symmetry: independent atoms suffice. Else every atom is written. */
  readonly isWhole: boolean
}

const extreme = (list: readonly number[], pick: (x: number, y: number) => number): number =>
  list.reduce((x, y) => pick(x, y))

function symmetryIn(
  crystal: Crystal,
  rows: Mat3,
  height: number | undefined,
  notes: string[],
): WrittenSymmetry {
  const alone: WrittenSymmetry = { operations: [IDENTITY_OPERATION], isWhole: false }
  const { symmetry, lattice } = crystal
  const isBare = crystal.atoms.length === 0
  const named = isBare ? namedOperations(crystal, rows) : undefined
  if (named) {
    notes.push('No atoms are stated: the operations are those of the space group that the file names.')
    return { operations: named, isWhole: true }
  }
  if (!symmetry || (isBare && lattice!.dimension !== 3)) {
    if (!isBare) notes.push('The symmetry could not be found: every atom stands for itself.')
    const points =
      lattice!.dimension === 3 ? translationsIn(inverseRows(lattice!.primitive, rows)) : undefined
    return { ...alone, operations: points ?? alone.operations }
  }
  if (isBare) notes.push('No atoms are stated: the operations are those of the lattice.')
  // Rows: the primitive vectors in fractions of the written cell; of a sheet the normal is a unit one.
  const primitive: Mat3 = [symmetry.primitive[0], symmetry.primitive[1], symmetry.primitive[2]]
  const axes = inverseRows(primitive, rows)
  const there = transpose(axes)
  const back = inverse(there)
  // Across a sheet nothing repeats: what turns it over maps its two surfaces onto each other.
  const heights = isBare ? [0] : crystal.atoms.map(({ fraction }) => fraction[2])
  const turnedOver = extreme(heights, Math.min) + extreme(heights, Math.max)
  const stated = symmetry.operations.map(({ rotation, translation: [x, y, z] }) => ({
    rotation: multiply(multiply(there, rotation), back),
    translation: apply(there, [x, y, height === undefined ? z : rotation[2][2] < 0 ? turnedOver : 0]),
  }))
  // Other programs read translations in steps of a 24th, which an origin on no special position does not give.
  const isUsual = stated.every(({ translation }) => isTidy(translation))
  const origin = isUsual || !symmetry.standard ? undefined : apply(there, symmetry.standard.origin)
  const moved = stated.map(({ rotation, translation }) => ({
    rotation,
    translation: wrap(origin ? subtract(add(translation, apply(rotation, origin)), origin) : translation),
  }))
  const isWhole = moved.every(({ rotation }) =>
    rotation.flat().every(x => Math.abs(x - Math.round(x)) < WHOLE),
  )
  const periodic: Mat3 = height === undefined ? axes : [axes[0], axes[1], [0, 0, 1]]
  const translations = translationsIn(periodic)
  if (!moved.every(({ translation }) => isTidy(translation))) {
    notes.push('The operations have no usual origin: every atom is written.')
    return alone
  }
  if (!isWhole || !translations || moved.length * translations.length > MOST_OPERATIONS) {
    notes.push(
      'The cell holds several primitive ones, and keeps not all of their symmetry: every atom is written.',
    )
    return alone
  }
  const operations = translations.flatMap(({ translation: t }) =>
    moved.map(({ rotation, translation }) => ({
      rotation: mapMatrix(rotation, x => Math.round(x) + 0),
      translation: tidied(wrap([translation[0] + t[0], translation[1] + t[1], translation[2] + t[2]])),
    })),
  )
  if (origin) notes.push('The origin was moved to that of the standard setting.')
  return { operations, isWhole: true, origin }
}
const WHOLE = 1e-6

/** The operations of the named space group in a setting that has the cell's lattice points and fits its metric. */
function namedOperations({ document, lattice, tolerance }: Crystal, rows: Mat3): Operation[] | undefined {
  const name = document.spaceGroup?.value
  const group = name === undefined ? undefined : namedSpaceGroup(name)
  const points = lattice!.dimension === 3 && translationsIn(inverseRows(lattice!.primitive, rows))
  if (!group || !points) return undefined
  const keys = points.map(operationKey).sort().join()
  // What the name means in this cell, else the type in any setting.
  for (const setting of [...group.settings, ...spaceGroupSettings(group.number)]) {
    const operations = closed(settingOperations(setting)) ?? []
    const shifts = operations.filter(({ rotation }) => isUnit(rotation))
    const turns = operations.map(({ rotation }) => rotation)
    if (shifts.map(operationKey).sort().join() === keys && metricMiss(turns, rows).by <= tolerance)
      return operations
  }
  return undefined
}

/** Vectors in fractions of rows. */
const inverseRows = (vectors: Mat3, rows: Mat3): Mat3 => multiply(vectors, inverse(rows))

/** The lattice points in the written cell, as operations, from primitive vectors in its fractions. */
const translationsIn = (primitive: Mat3): readonly Operation[] | undefined =>
  closed(primitive.map(row => ({ rotation: IDENTITY_OPERATION.rotation, translation: wrap(tidied(row)) })))

/** Translations of space groups are of the order 24; found ones differ by what the tolerance lets atoms be away. */
const TIDY = 1e-3
const tidyOne = (x: number): number => Math.round(x * 24) / 24
const isTidy = (v: Vec3): boolean => v.every(x => Math.abs(x - tidyOne(x)) < TIDY)
const tidied = (v: Vec3): Vec3 =>
  v.map(x => (Math.abs(x - tidyOne(x)) < TIDY ? tidyOne(x) : x)) as unknown as Vec3

interface WrittenAtom {
  readonly label: string
  readonly element: string
  readonly position: Vec3
  readonly multiplicity: number
  readonly wyckoff?: string
}

function independentAtoms(crystal: Crystal, rows: Mat3, { isWhole, origin }: WrittenSymmetry): WrittenAtom[] {
  const { atoms, symmetry, lattice } = crystal
  const toCell = inverse(rows)
  const points = Math.round(
    lattice!.dimension === 3
      ? Math.abs(determinant(rows)) / lattice!.volume
      : Math.abs(determinant(lattice!.conventional)) / lattice!.volume,
  )
  const labels = new Labels()
  const place = ({ cartesian }: PlacedAtom): Vec3 =>
    wrap(subtract(combine(cartesian, toCell), origin ?? [0, 0, 0]))
  const placed = (atom: PlacedAtom, position: Vec3, multiplicity: number): WrittenAtom => ({
    label: labels.of(atom),
    element: atom.element,
    position,
    multiplicity,
    wyckoff: isWhole ? symmetry?.wyckoffLetters?.[atom.index] : undefined,
  })
  if (isWhole && atoms.length > 0) {
    const counts = new Map<number, number>()
    for (const i of symmetry!.equivalentAtoms) counts.set(i, (counts.get(i) ?? 0) + 1)
    return [...counts].map(([i, count]) => {
      const atom = atoms[i]
      return placed(atom, place(atom), count * points)
    })
  }
  return atoms.map(atom => placed(atom, place(atom), points))
}

/** `Fe1`, or the name that the file gives where it begins with the element and is free. */
class Labels {
  readonly #used = new Set<string>()
  of({ element, entry }: PlacedAtom): string {
    const name = entry.name?.value
    if (name?.startsWith(element) && /^[A-Za-z][A-Za-z0-9_+-]*$/.test(name) && !this.#used.has(name)) {
      this.#used.add(name)
      return name
    }
    for (let n = 1; ; n++) {
      const label = `${element}${n}`
      if (this.#used.has(label)) continue
      this.#used.add(label)
      return label
    }
  }
}

// Lines.

const WIDTH = 78
const NAME_WIDTH = 35

const comment = (text: string): string[] =>
  wrapWords(ascii(harmless(text)).replace(/\s+/g, ' '), WIDTH).map(line => `# ${line}`)

/** CIF 1.1 knows the characters of ASCII only. */
const ascii = (text: string): string =>
  text
    .normalize('NFKD')
    .replace(/[–—−]/g, '-')
    .replace(/[^ -~]/g, character => GREEK[character] ?? '')
const GREEK: Readonly<Record<string, string>> = {
  α: 'alpha',
  β: 'beta',
  γ: 'gamma',
  δ: 'delta',
  ε: 'epsilon',
  θ: 'theta',
  Γ: 'Gamma',
}

const item = (name: string, value: string): string[] => [`${name.padEnd(NAME_WIDTH)} ${value}`]

const loop = (names: readonly string[], rows: readonly (readonly string[])[]): string[] =>
  rows.length === 0 ? [] : ['loop_', ...names, ...rows.map(row => row.map(quotedIfNeeded).join(' '))]

const quotedIfNeeded = (text: string): string =>
  /^[A-Za-z0-9.+-][^\s'"]*$/.test(text) && !/^(data|save|loop|stop|global)_/i.test(text) ? text : `'${text}'`

const blockName = (title: string | undefined, number: number): string =>
  ascii(title ?? '')
    .replace(/[^A-Za-z0-9]+/g, '_')
    .replace(/^_|_$/g, '')
    .slice(0, LONGEST_NAME) || `crystal_${number}`
const LONGEST_NAME = 60

function cellLines(rows: Mat3, angstrom: number): string[] {
  const { a, b, c, alpha, beta, gamma } = cellParameters(rows)
  const length = (x: number) => formatNumber(x * angstrom, CELL_DIGITS)
  const angle = (x: number) => formatNumber(x, CELL_DIGITS)
  return [
    ...item('_cell_length_a', length(a)),
    ...item('_cell_length_b', length(b)),
    ...item('_cell_length_c', length(c)),
    ...item('_cell_angle_alpha', angle(alpha)),
    ...item('_cell_angle_beta', angle(beta)),
    ...item('_cell_angle_gamma', angle(gamma)),
    ...item('_cell_volume', formatNumber(Math.abs(determinant(rows)) * angstrom ** 3, 4)),
  ]
}

/** The sum of the atoms, carbon and hydrogen first as the dictionary asks, then by the alphabet. */
function formulaLines({ atoms, lattice }: Crystal, rows: Mat3): string[] {
  if (atoms.length === 0) return []
  const numbers = new Map<string, number>()
  for (const { element } of atoms) numbers.set(element, (numbers.get(element) ?? 0) + 1)
  const common = [...numbers.values()].reduce(gcd)
  const hasCarbon = numbers.has('C')
  const rank = (element: string) => (hasCarbon && element === 'C' ? 0 : hasCarbon && element === 'H' ? 1 : 2)
  const sum = [...numbers]
    .sort(([p], [q]) => rank(p) - rank(q) || (p < q ? -1 : 1))
    .map(([element, n]) => (n === common ? element : `${element}${n / common}`))
    .join(' ')
  const cells =
    lattice!.dimension === 3 ? Math.abs(determinant(rows)) : Math.abs(determinant(lattice!.conventional))
  return [
    ...item('_chemical_formula_sum', `'${sum}'`),
    ...item('_cell_formula_units_Z', String(common * Math.round(cells / lattice!.volume))),
  ]
}
const gcd = (p: number, q: number): number => (q === 0 ? p : gcd(q, p % q))

function groupLines(operations: readonly Operation[]): string[] {
  const number = groupNumber(operations)
  if (number === undefined) return []
  const keys = new Set(operations.map(operationKey))
  const setting = spaceGroupSettings(number).find(setting => {
    const known = closed(settingOperations(setting))
    return known?.length === keys.size && known.every(operation => keys.has(operationKey(operation)))
  })
  const lines = item('_space_group_IT_number', String(number))
  if (!setting)
    return [...lines, ...item('_space_group_name_H-M_ref', `'${plainSymbol(spaceGroupType(number).symbol)}'`)]
  const choice = /^[12HR]$/.test(setting.choice) ? ` :${setting.choice}` : ''
  return [
    ...lines,
    ...item(
      '_space_group_name_H-M_alt',
      `'${plainSymbol(isShort(setting.fullSymbol) ? setting.symbol : setting.fullSymbol)}${choice}'`,
    ),
    ...item('_space_group_name_Hall', `'${setting.hallSymbol.replace(/=/g, '"')}'`),
  ]
}
const plainSymbol = (symbol: string): string => symbol.replace(/_/g, '')
/** A full symbol with 1 in it tells the unique axis; others are better known by the short one. */
const isShort = (full: string): boolean => !/ 1( |$)/.test(full)

function atomLines(atoms: readonly WrittenAtom[], isWhole: boolean): string[] {
  const hasWyckoff = isWhole && atoms.every(({ wyckoff }) => wyckoff !== undefined)
  return loop(
    [
      '_atom_site_label',
      '_atom_site_type_symbol',
      '_atom_site_fract_x',
      '_atom_site_fract_y',
      '_atom_site_fract_z',
      '_atom_site_site_symmetry_multiplicity',
      ...(hasWyckoff ? ['_atom_site_Wyckoff_symbol'] : []),
    ],
    atoms.map(({ label, element, position, multiplicity, wyckoff }) => [
      label,
      element,
      ...position.map(x => formatNumber(x, COORDINATE_DIGITS)),
      String(multiplicity),
      ...(hasWyckoff ? [wyckoff!] : []),
    ]),
  )
}
