/**
 * Restate a document in another cell of its crystal: the lattice, and with it every number that refers to its axes.
 * Only numbers that change are touched, so comments and layout stay; exact fractions stay exact.
 */
import {
  BRAVAIS,
  type BravaisType,
  type Centring,
  CENTRING_TABLES,
  completeCell,
} from '../crystal/bravais.ts'
import {
  type CellParameters,
  cellParameters,
  isLattice,
  type Lattice,
  latticeFromCell,
  latticeFromVectors,
} from '../crystal/lattice.ts'
import {
  combine,
  determinant,
  distance,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  transpose,
  type Vec3,
} from '../crystal/vector.ts'
import {
  insertKeys,
  type NewKey,
  removeEntry,
  removeItems,
  replaceValue,
  replaceVector,
  scalarText,
  standsHere,
} from '../format/edits.ts'
import {
  type Entry,
  type Fraction,
  type LatticeBlock,
  type LatticeDocument,
  type MeshBlock,
  type NumberValue,
  PARAMETER_NAMES,
  type ParameterName,
  type TextEdit,
  type VectorValue,
} from '../format/model.ts'
import { formatPath } from '../format/path.ts'
import { formatFraction, formatNumber, recogniseFraction } from '../format/numbers.ts'
import { lineBreak, lineStart } from '../format/text.ts'
import { plusWhole, rational, sumOf, wrapped, writeSum } from './combinations.ts'
import type { Crystal } from './crystal.ts'
import { atomCopies } from './rewrite-copies.ts'

/** Another cell of the same crystal. */
export interface Cell {
  /**
   * Rows: its conventional vectors as rational combinations of the file's conventional ones. Its lattice is that of the
   * file, or contains it where the file's cell holds several primitive ones.
   */
  readonly change: Mat3
  readonly centring: Centring
  /** State it by this type and its parameters, in the type's own orientation; by vectors where absent. */
  readonly bravais?: BravaisType
  /**
   * It holds several of the file's primitive cells, and these whole numbers give its primitive vectors by the file's.
   * Atoms are written out in it, the places of the path are kept as points, and the key `supercell` goes.
   */
  readonly supercell?: Mat3
}

export interface Restatement {
  readonly edits: readonly TextEdit[]
  /** Turns Cartesian rows as they were into those of the new text; undefined where nothing is turned. */
  readonly rotation?: Mat3
  /** The book's labels on the path mean the same k as before, turned with the crystal. */
  readonly labelsKept: boolean
  /** Every mesh is the same set of k-points as before. */
  readonly meshesKept: boolean
}

/** Crystal, path and mesh are what they were. */
export const keepsAll = ({ labelsKept, meshesKept }: Restatement): boolean => labelsKept && meshesKept

/**
 * The edits that restate a document.
 * @returns undefined where something in the document cannot be read, or cannot be said in the other cell.
 */
export function restate(crystal: Crystal, text: string, cell: Cell): Restatement | undefined {
  const task = taskOf(crystal, text, cell)
  if (!task) return undefined
  const labels = labelEdits(task)
  const meshes = crystal.document.meshes.map(mesh => meshEdits(task, mesh))
  const supercell = supercellEdits(task)
  const atoms = atomEdits(task)
  if (!supercell || !atoms) return undefined
  const edits = [
    ...latticeEdits(task),
    ...atoms,
    ...pointEdits(task),
    ...labels.edits,
    ...meshes.flatMap((mesh, i) => [
      ...mesh.edits,
      ...otherPointsNote(task, crystal.document.meshes[i], mesh),
    ]),
    ...supercell,
  ]
  return {
    edits: edits.filter(edit => text.slice(...edit.at) !== edit.text),
    rotation: task.rotation,
    labelsKept: labels.kept,
    meshesKept: meshes.every(mesh => mesh.kept),
  }
}

interface Task {
  readonly crystal: Crystal
  readonly text: string
  readonly block: LatticeBlock
  readonly cell: Cell
  readonly old: Lattice
  readonly lattice: Lattice
  readonly rotation?: Mat3
  /** Rows: new primitive vectors as combinations of the old ones. */
  readonly change: Mat3
  /** The free parameters of the new statement, where it is by type. */
  readonly parameters?: Partial<Record<ParameterName, number>>
  /** Does an expression that uses these parameters still mean the same? */
  readonly stays: (uses: readonly ParameterName[]) => boolean
}

function taskOf(crystal: Crystal, text: string, cell: Cell): Task | undefined {
  const { document, lattice: old } = crystal
  const block = document.lattice
  if (!old || !block || !crystal.atomsComplete || !pointsAreRead(crystal)) return undefined
  if (!vectorsOf(crystal).every(vector => isInPlace(text, vector))) return undefined
  const rows = multiply(cell.change, old.conventional)
  const parameters = cell.bravais && freeParameters(cell.bravais, cellParameters(rows))
  const made = parameters
    ? fromParameters(cell.bravais!, parameters)
    : latticeFromVectors(rows.slice(0, old.dimension), cell.centring)
  if (!made || !isLattice(made)) return undefined
  const table = CENTRING_TABLES[cell.centring]
  const primitiveFromConventional = mapMatrix(table.numerators, x => x / table.denominator)
  const change = multiply(multiply(primitiveFromConventional, cell.change), old.conventionalFromPrimitive)
  // A larger cell needs atoms added: the caller must mean it.
  if (Math.abs(determinant(change)) > 1 + SAME && !cell.supercell) return undefined
  const turn = multiply(inverse(rows), made.conventional)
  return {
    crystal,
    text,
    block,
    cell,
    old,
    lattice: made,
    rotation: isIdentity(turn) ? undefined : turn,
    change,
    parameters,
    stays: uses => uses.every(name => keeps(block, parameters, name)),
  }
}

/** What arithmetic leaves between two numbers that are equal, relative to their size. */
const SAME = 1e-9

const isIdentity = (m: Mat3): boolean => m.every((row, i) => distance(row, IDENTITY[i]) < SAME)

const pointsAreRead = ({ document, points }: Crystal): boolean =>
  (document.points?.items ?? []).every(({ label }) => points.has(label))

/** All vectors of the document that a restatement may touch. */
const vectorsOf = ({ document }: Crystal): VectorValue[] =>
  [
    ...(document.lattice?.vectors?.rows ?? []),
    ...(document.atoms?.items ?? []).map(({ position }) => position),
    ...(document.points?.items ?? []).map(({ coordinates }) => coordinates),
    ...document.meshes.flatMap(({ divisions, shift }) => [divisions, shift]),
    ...(document.supercell?.rows ?? []),
  ].filter(vector => vector !== undefined)

/** All read, and none behind an alias: an edit there would be one of another number too. */
const isInPlace = (text: string, { at, items }: VectorValue): boolean =>
  standsHere(text, at) && items.every(item => item && standsHere(text, item.at))

/** A parameter that the new lattice block still states with the same value. By vectors, all of them are definitions. */
function keeps(block: LatticeBlock, parameters: Task['parameters'], name: ParameterName): boolean {
  if (!parameters) return true
  const value = parameters[name]
  return value !== undefined && isSame(value, block.parameters[name]?.value)
}

const isSame = (x: number, y: number | undefined): boolean =>
  y !== undefined && Math.abs(x - y) <= SAME * Math.abs(x)

// The lattice block

/** The parameters that a type leaves free; lengths that it ties are averaged. */
function freeParameters(type: BravaisType, cell: CellParameters): Partial<Record<ParameterName, number>> {
  const { system, free } = BRAVAIS[type]
  const { a, b, c } = cell
  const side = system === 'cubic' ? (a + b + c) / 3 : (a + b) / 2
  const isTied = ['cubic', 'tetragonal', 'hexagonal', 'rhombohedral', 'square'].includes(system)
  const values = { ...cell, a: isTied ? side : a }
  // Of a monoclinic type's angles the oblique one counts.
  const skew = (names: readonly ParameterName[]) => Math.abs(values[names.at(-1)!] - 90)
  const names =
    system === 'monoclinic' ? free.reduce((best, set) => (skew(set) > skew(best) ? set : best)) : free[0]
  return Object.fromEntries(names.map(name => [name, values[name]]))
}

function fromParameters(type: BravaisType, parameters: Partial<Record<ParameterName, number>>) {
  const { centring, dimension } = BRAVAIS[type]
  const completed = completeCell(type, parameters)
  return 'cell' in completed ? latticeFromCell(completed.cell, centring, dimension) : undefined
}

const latticeEdits = (task: Task): TextEdit[] =>
  task.parameters ? statedByType(task, task.parameters) : statedByVectors(task)

function statedByType(
  { text, block, cell, stays }: Task,
  parameters: NonNullable<Task['parameters']>,
): TextEdit[] {
  const edits: TextEdit[] = []
  const added: [string, string][] = []
  const removed = ['vectors', 'centring'].filter(key => block.keys.has(key))
  if (block.bravais) edits.push({ at: block.bravais.at, text: cell.bravais! })
  else added.push(['bravais', cell.bravais!])
  const known = PARAMETER_NAMES.flatMap(name => block.parameters[name] ?? [])
  for (const name of PARAMETER_NAMES) {
    const value = parameters[name]
    const stated = block.parameters[name]
    if (value === undefined) {
      if (block.keys.has(name)) removed.push(name)
      continue
    }
    if (stated && isSame(value, stated.value) && stays(stated.uses)) continue
    const alike = known.find(number => number.uses.length === 0 && isSame(value, number.value))
    const written = alike?.text ?? formatNumber(value, DIGITS)
    if (stated) edits.push({ at: stated.at, text: written })
    else added.push([name, written])
  }
  return [
    ...edits,
    ...together(removals(text, block, removed), added.length > 0 ? insertKeys(text, block, added) : []),
  ]
}

/** Keys inserted where others are cut off the end of a mapping in braces take their place. */
function together(removed: readonly TextEdit[], inserted: readonly TextEdit[]): TextEdit[] {
  const isInside = ({ at: [start, end] }: TextEdit, offset: number) => start < offset && offset < end
  const apart = inserted.filter(({ at }) => !removed.some(edit => isInside(edit, at[0])))
  const filled = removed.map(edit => {
    const keys = inserted.flatMap(({ at, text }) => (isInside(edit, at[0]) ? [text.replace(/, $/, '')] : []))
    return { at: edit.at, text: keys.map(key => `, ${key}`).join('') }
  })
  return [...filled, ...apart]
}

/** The entries of some keys; at the end of a mapping in braces, the comma before them goes too. */
function removals(text: string, block: LatticeBlock, names: readonly string[]): TextEdit[] {
  const entries = [...block.keys].sort(([, e], [, f]) => e.key[0] - f.key[0])
  const last = entries.findLastIndex(([name]) => !names.includes(name))
  const isInBraces = text[block.at[0]] === '{' && last >= 0
  const [inside, atEnd] = isInBraces ? [entries.slice(0, last), entries.slice(last + 1)] : [entries, []]
  const edits = inside.filter(([name]) => names.includes(name)).map(([, entry]) => removeEntry(text, entry))
  if (atEnd.length > 0) edits.push({ at: [endOf(entries[last][1]), endOf(atEnd.at(-1)![1])], text: '' })
  return edits
}

const endOf = ({ key, at }: Entry): number => Math.max(key[1], at[1])

/** Digits after the point of a length that is no simple number. */
const DIGITS = 10

function statedByVectors(task: Task): TextEdit[] {
  const { crystal, text, block, cell, old, lattice, change } = task
  const edits: TextEdit[] = []
  const added: [string, string][] = []
  if (block.vectors) edits.push(...rowEdits(task, block.vectors.rows as readonly VectorValue[]))
  else added.push(['vectors', formatRows(lattice.conventional.slice(0, old.dimension))])
  if (block.centring) edits.push({ at: block.centring.at, text: cell.centring })
  else if (cell.centring !== 'P') added.push(['centring', cell.centring])
  if (block.bravais && !isSame(Math.abs(determinant(change)), 1)) {
    const type = crystal.typeOf(lattice.primitive, lattice.dimension)?.bravais
    if (type) edits.push({ at: block.bravais.at, text: type })
  }
  // Beside vectors a parameter is a definition; one that nobody uses would only go stale.
  const unused = block.vectors ? [] : removals(text, block, unusedParameters(crystal))
  return [...edits, ...together(unused, added.length > 0 ? insertKeys(text, block, added) : [])]
}

/** The stated parameters that no number of the document, and no frame, needs. */
function unusedParameters({ document }: Crystal): ParameterName[] {
  const { lattice, frames } = document
  const numbers = [
    ...PARAMETER_NAMES.map(name => lattice?.parameters[name]),
    ...[lattice?.height, document.tolerance],
    ...numbersOf(document),
  ]
  const used = new Set(numbers.flatMap(number => number?.uses ?? []))
  if (frames.points === '2pi/a') used.add('a')
  return PARAMETER_NAMES.filter(name => lattice?.keys.has(name) && !used.has(name))
}

const numbersOf = (document: LatticeDocument): (NumberValue | undefined)[] => [
  ...(document.atoms?.items ?? []).flatMap(({ position }) => position?.items ?? []),
  ...(document.points?.items ?? []).flatMap(({ coordinates, between }) => [
    ...(coordinates?.items ?? []),
    between?.fraction,
  ]),
  ...document.meshes.flatMap(({ divisions, spacing, shift }) => [
    ...(divisions?.items ?? []),
    spacing,
    ...(shift?.items ?? []),
  ]),
  ...[document.sampling?.spacing, document.sampling?.steps, document.sampling?.total],
  ...(document.supercell?.rows ?? []).flatMap(row => row?.items ?? []),
]

const formatRows = (rows: readonly Vec3[]): string =>
  `[${rows.map(row => `[${row.map(x => formatNumber(x, DIGITS)).join(', ')}]`).join(', ')}]`

const NOTHING: NumberValue = { value: 0, at: [0, 0], text: '0', exact: { p: 0, q: 1 }, decimals: 0, uses: [] }
const itemsOf = (vector: VectorValue): readonly NumberValue[] => vector.items as readonly NumberValue[]

function rowEdits({ text, cell, old, stays }: Task, rows: readonly VectorValue[]): TextEdit[] {
  return rows.flatMap((row, i) => {
    const times = cell.change[i].slice(0, old.dimension).map(rational)
    const numbers = row.items.map((_, k) => {
      const column = rows.map(other => itemsOf(other)[k] ?? NOTHING)
      return writeSum(sumOf(column, times), stays)
    })
    return replaceVector(text, row, numbers)
  })
}

// Atoms

function atomEdits(task: Task): TextEdit[] | undefined {
  const { crystal, change } = task
  if (crystal.atoms.length === 0) return []
  if (task.cell.supercell) return atomCopies(crystal, task.text, task.cell.supercell)
  const kept = firstOfEach(task)
  if (!kept) return undefined
  const frame = crystal.document.frames.atoms
  const fractions =
    frame === 'cartesian' ? undefined : inverse(frame === 'primitive' ? change : task.cell.change)
  const removed = crystal.atoms.filter(({ index }) => !kept.has(index)).map(({ entry }) => entry)
  const moved = crystal.atoms.flatMap(({ entry, index }) => {
    if (!kept.has(index)) return []
    if (fractions) return fractionEdits(task, entry.position!, fractions)
    return task.rotation ? turnedEdits(task, entry.position!, task.rotation) : []
  })
  return [...removeItems(crystal.document.atoms!, removed), ...moved]
}

/** Indices of the atoms that stay: of those that a translation of the new lattice carries into each other, the first. */
function firstOfEach({ crystal, change }: Task): ReadonlySet<number> | undefined {
  const fold = Math.round(1 / Math.abs(determinant(change)))
  if (fold === 1) return new Set(crystal.atoms.map(atom => atom.index))
  const { symmetry } = crystal
  if (symmetry?.translationsFold !== fold) return undefined
  const seen = new Set<number>()
  const kept = new Set<number>()
  crystal.atoms.forEach((atom, i) => {
    const site = symmetry.primitiveAtomOf[i]
    if (!seen.has(site)) kept.add(atom.index)
    seen.add(site)
  })
  return kept
}

function fractionEdits({ text, lattice, stays }: Task, position: VectorValue, matrix: Mat3): TextEdit[] {
  const items = itemsOf(position)
  const numbers = transpose(matrix).map((column, j) => {
    if (j >= lattice.dimension) return undefined
    const times = column.map((x, i) => (i < lattice.dimension ? rational(x) : NONE))
    return writeSum(wrapped(sumOf(items, times)), stays, 'fraction')
  })
  return replaceVector(text, position, numbers)
}
const NONE: Fraction = { p: 0, q: 1 }

/** Cartesian components of a vector that is turned with the crystal. */
function turnedEdits({ text }: Task, vector: VectorValue, rotation: Mat3, scale = 1): TextEdit[] {
  const items = itemsOf(vector)
  const [x, y, z] = [0, 1, 2].map(i => items[i]?.value ?? 0)
  const turned = combine([x, y, z], rotation)
  return replaceVector(
    text,
    vector,
    items.map((_, i) => formatNumber(turned[i] * scale, DIGITS)),
  )
}

// k-points

function pointEdits(task: Task): TextEdit[] {
  const { crystal, cell, change, rotation } = task
  const { document } = crystal
  const frame = document.frames.points
  const vectors = (document.points?.items ?? []).flatMap(({ coordinates }) => coordinates ?? [])
  if (frame === 'primitive') return vectors.flatMap(vector => kEdits(task, vector, change))
  if (frame === 'conventional') return vectors.flatMap(vector => kEdits(task, vector, cell.change))
  const factor = frame === '2pi/a' ? unitFactor(task) : 1
  if (!rotation && factor === 1) return []
  return vectors.flatMap(vector => turnedEdits(task, vector, rotation ?? IDENTITY, factor))
}

/** k-fractions are columns: κ′ = W κ, where W gives the new vectors in terms of the old ones. */
function kEdits({ text, old, stays }: Task, vector: VectorValue, matrix: Mat3): TextEdit[] {
  const items = itemsOf(vector)
  const numbers = items.map((_, i) => {
    if (i >= old.dimension) return undefined
    const times = items.map((_, j) => (j < old.dimension ? rational(matrix[i][j]) : NONE))
    return writeSum(sumOf(items, times), stays, 'fraction')
  })
  return replaceVector(text, vector, numbers)
}

/** How many units 2π/a of the new text one of the old is. */
function unitFactor({ block, parameters }: Task): number {
  const before = block.parameters.a?.value
  const after = parameters ? parameters.a : before
  return before && after && !isSame(before, after) ? after / before : 1
}

/**
 * Labels of the book that the path uses: those that the new lattice's book has too stay as they are, the others become
 * points of the file. In a supercell all of them do, and where its book would give one of the file's labels to another
 * place, no book is in force any more.
 */
function labelEdits(task: Task): { edits: TextEdit[]; kept: boolean } {
  const { crystal, text, lattice, cell, rotation = IDENTITY } = task
  const { document } = crystal
  if (document.labels === 'none' || !crystal.book) return { edits: [], kept: true }
  const found = crystal.bookMatch(document.labels, lattice)
  const there = new Map(
    found?.points.map(({ label, fraction }) => [label, combine(fraction, lattice.reciprocal)]),
  )
  const isElsewhere = (label: string, k: Vec3): boolean => {
    const now = there.get(label)
    return now !== undefined && distance(k, now) > SAME_POINT * norm(lattice.reciprocal[0])
  }
  const used = bookLabels(crystal).map(label => {
    const k = combine(crystal.bookPoints.get(label)!.cartesian, rotation)
    return { label, k, moved: isElsewhere(label, k) }
  })
  const moves = used.some(({ moved }) => moved)
  const lost = cell.supercell ? used : used.filter(({ label }) => !there.has(label))
  const added = lost.map(
    ({ label, k }): NewKey => [label, `[${stated(task, k).map(coordinateText).join(', ')}]`],
  )
  if (!cell.supercell) return { edits: labelledPoints(text, document, added), kept: !moves }
  const own = [...crystal.points.values()].some(({ label, cartesian }) => isElsewhere(label, cartesian))
  const edits = labelledPoints(text, document, added, moves || own ? 'none' : undefined)
  const path = document.path?.recommended ? crystal.book.path : []
  if (path.length > 0) edits.push(replaceValue(text, document.path!, formatPath(path)))
  return { edits, kept: true }
}

/** Insert points, with a block for them where there is none, and perhaps name another book. */
function labelledPoints(
  text: string,
  document: LatticeDocument,
  added: readonly NewKey[],
  book?: LatticeDocument['labels'],
): TextEdit[] {
  const { points, labelsEntry } = document
  const edits = points && added.length > 0 ? insertKeys(text, points, added) : []
  const keys: NewKey[] = []
  if (!points && added.length > 0)
    keys.push(['points', `{${added.map(([label, k]) => `${scalarText(label)}: ${k}`).join(', ')}}`])
  if (book && labelsEntry) edits.push(replaceValue(text, labelsEntry, book))
  else if (book) keys.push(['labels', book])
  return keys.length > 0 ? [...edits, ...insertKeys(text, document, keys)] : edits
}

/** A coordinate that is not made of the file's own numbers: a simple fraction where it is one. */
function coordinateText(x: number): string {
  const exact = recogniseFraction(x, SAME)
  return exact ? formatFraction(exact) : formatNumber(x, DIGITS)
}

/** Two k are one when they differ by less, relative to a reciprocal vector. */
const SAME_POINT = 1e-6

/** The labels of the book that the path, or a point between others, uses. */
function bookLabels(crystal: Crystal): string[] {
  const { document, book, bookPoints } = crystal
  const written = (document.path?.pieces ?? []).flatMap(piece => piece.labels.map(({ label }) => label))
  const ends = (document.points?.items ?? []).flatMap(
    point => point.between?.ends.map(({ label }) => label) ?? [],
  )
  const own = document.path?.recommended ? (book?.path.flat() ?? []) : []
  const labels = new Set([...written, ...ends, ...own])
  return [...labels].filter(label => !crystal.fileDefines(label) && bookPoints.has(label))
}

/** A Cartesian k of the new text in the frame of the file's points. */
function stated({ crystal, lattice, parameters, block }: Task, k: Vec3): number[] {
  const a = (parameters ? parameters.a : block.parameters.a?.value) ?? 1
  const axes: Record<typeof crystal.document.frames.points, Mat3> = {
    primitive: lattice.reciprocal,
    conventional: lattice.conventionalReciprocal,
    cartesian: IDENTITY,
    '2pi/a': mapMatrix(IDENTITY, x => (x * 2 * Math.PI) / a),
  }
  return combine(k, inverse(axes[crystal.document.frames.points])).slice(0, lattice.dimension)
}

// Mesh and supercell

/**
 * A mesh on other reciprocal vectors. κ = (n + s)/N becomes κ′ = Wκ. The same points are a mesh N′ with N′ = diag where
 * R = N′ W N⁻¹ is whole-numbered with determinant ±1; its shift is R s. Where no N′ does that, steps as fine as the old
 * ones are taken, from Γ on.
 */
function meshEdits(task: Task, mesh: MeshBlock): { edits: TextEdit[]; kept: boolean } {
  const { old, lattice, change } = task
  const { dimension } = old
  const shift = mesh.shift
  if (!mesh.divisions) {
    const isPermuted = change.every(row => row.filter(x => Math.abs(x) > SAME).length === 1)
    if (!shift || isPermuted) return { edits: shift ? shiftEdits(task, shift, change) : [], kept: isPermuted }
    return { edits: zeroEdits(task, shift), kept: false }
  }
  const items = itemsOf(mesh.divisions)
  const before = [0, 1, 2].map(i => (i < dimension ? (items[i]?.value ?? 1) : 1))
  const exactly = before.map((_, i) => (i < dimension ? commonDivisions(change[i], before) : 1))
  const isSameMesh = isSame(product(exactly) * Math.abs(determinant(change)), product(before))
  const steps = before.map((n, i) => norm(old.reciprocal[i]) / n)
  const nearby = before.map((_, i) =>
    i < dimension ? divisionsFor(norm(lattice.reciprocal[i]), finest(change[i], steps)) : 1,
  )
  const after = isSameMesh ? exactly : nearby
  const edits = replaceVector(
    task.text,
    mesh.divisions,
    items.map((_, i) => String(after[i])),
  )
  if (!shift) return { edits, kept: isSameMesh }
  if (!isSameMesh) return { edits: [...edits, ...zeroEdits(task, shift)], kept: false }
  const matrix = change.map((row, i) => row.map((x, j) => (after[i] * x) / before[j])) as unknown as Mat3
  return { edits: [...edits, ...shiftEdits(task, shift, matrix)], kept: true }
}

/** A mesh of a supercell that is not the old one says so, on a line of its own. */
function otherPointsNote({ text, cell }: Task, mesh: MeshBlock, { kept }: { kept: boolean }): TextEdit[] {
  const { divisions, shift, key } = mesh
  const start = lineStart(text, key[0])
  const indent = text.slice(start, key[0])
  if (!cell.supercell || kept || !divisions || /\S/.test(indent)) return []
  const before = [divisions, shift].flatMap(vector => (vector ? [text.slice(...vector.at)] : []))
  if (before.some(part => /[\n#]/.test(part))) return []
  const note = `# Steps as fine as, but not the k-points of, ${before.join(' shifted by ')} of the primitive cell.`
  return [{ at: [start, start], text: `${indent}${note}${lineBreak(text)}` }]
}

const product = (numbers: readonly number[]): number => numbers.reduce((x, y) => x * y, 1)

/** The smallest n for which every n·wⱼ/Nⱼ is whole. */
function commonDivisions(row: Vec3, divisions: readonly number[]): number {
  return row.reduce((common, x, j) => {
    const { p, q } = rational(x)
    if (p === 0) return common
    const needed = (q * divisions[j]) / gcd(Math.abs(p), q * divisions[j])
    return (common / gcd(common, needed)) * needed
  }, 1)
}

const gcd = (p: number, q: number): number => (q === 0 ? p : gcd(q, p % q))

/** The finest of the old steps along the directions that a new vector is made of. */
const finest = (row: Vec3, steps: readonly number[]): number =>
  Math.min(...steps.filter((_, j) => Math.abs(row[j]) > SAME))
const divisionsFor = (length: number, step: number): number => Math.max(1, Math.ceil(length / step - SAME))

function shiftEdits({ text, old, stays }: Task, shift: VectorValue, matrix: Mat3): TextEdit[] {
  const items = itemsOf(shift)
  const numbers = items.map((_, i) => {
    if (i >= old.dimension) return undefined
    const times = items.map((_, j) => (j < old.dimension ? rational(matrix[i][j]) : NONE))
    const sum = sumOf(items, times)
    return writeSum(plusWhole(sum, -Math.floor(sum.value + SAME)), stays)
  })
  return replaceVector(text, shift, numbers)
}

const zeroEdits = ({ text }: Task, vector: VectorValue): TextEdit[] =>
  replaceVector(
    text,
    vector,
    vector.items.map(() => '0'),
  )

/** The rows of a supercell in terms of the new vectors: S′ = S W⁻¹, its vectors renumbered where the axes were. */
function supercellEdits(task: Task): TextEdit[] | undefined {
  const { crystal, text, change } = task
  const { supercell, document } = crystal
  const block = document.supercell
  if (!block) return []
  if (task.cell.supercell) return [removeEntry(task.text, block)]
  if (!supercell) return undefined
  const carried = mapMatrix(multiply(supercell, inverse(change)), round)
  if (!carried.every(row => row.every(Number.isInteger))) return undefined
  const isPermuted = change.every(row => row.filter(x => x !== 0).length === 1 && row.every(Number.isInteger))
  const turnsOver = determinant(carried) * determinant(supercell) < 0
  const after = isPermuted
    ? mapMatrix(multiply(change, carried), round)
    : mapMatrix(carried, x => (turnsOver ? 0 - x : x))
  const [first] = block.rows
  if (block.diagonal && after.every((row, i) => row.every((x, j) => i === j || x === 0)))
    return replaceVector(
      text,
      first!,
      first!.items.map((_, i) => String(after[i][i])),
    )
  if (block.diagonal) {
    const { dimension } = crystal
    const rows = after.slice(0, dimension).map(row => `[${row.slice(0, dimension).join(', ')}]`)
    return [replaceValue(text, block, `[${rows.join(', ')}]`)]
  }
  return block.rows.flatMap((row, i) =>
    replaceVector(
      text,
      row!,
      row!.items.map((_, j) => String(after[i][j])),
    ),
  )
}

/** A whole number where the arithmetic left one, up to rounding. */
const round = (x: number): number => (Math.abs(x - Math.round(x)) < 1e-6 ? Math.round(x) + 0 : x)
