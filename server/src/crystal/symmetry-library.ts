/**
 * The one file that knows the crystal-symmetry library (@spglib/moyo-wasm, MIT or Apache-2.0). It takes and gives plain
 * rows, checks every input before the call, and starts the library afresh after a failure inside it.
 *
 * The file system is not known here: whoever starts the program hands over the bytes of the WebAssembly module.
 */
import {
  analyze_cell,
  hall_symbol_entries_from_number,
  initSync,
  type MoyoOperation,
  operations_from_number,
  space_group_type,
} from '@spglib/moyo-wasm'
import { determinant, dot, type Mat3, type Vec3 } from './vector.ts'

/** x′ = rotation · x + translation on columns of fractions. */
export interface Operation {
  readonly rotation: Mat3
  readonly translation: Vec3
}

/** A cell for the library: reduced, primitive, right-handed, no two atoms at one place. Rows of `basis` are vectors. */
export interface LibraryCell {
  readonly basis: Mat3
  readonly positions: readonly Vec3[]
  /** Positive whole numbers; the same number means the same kind of atom. */
  readonly species: readonly number[]
}

export interface LibraryAnswer {
  /** International Tables number, 1–230. */
  readonly number: number
  readonly hallNumber: number
  /** On fractions of the cell that was handed in. */
  readonly operations: readonly Operation[]
  /** For each atom the lowest index of the atoms equivalent to it. */
  readonly orbits: readonly number[]
  readonly siteSymmetry: readonly string[]
  readonly wyckoffLetters: readonly string[]
  /** Pearson symbol of the lattice without the number of atoms, e.g. `oS`. */
  readonly lattice: string
  /** Rows: the standard cell's vectors as combinations of the rows of `basis`. */
  readonly standardFromCell: Mat3
  /** The standard cell's origin in fractions of the cell that was handed in. */
  readonly standardOrigin: Vec3
  /** Turns the standard cell's vectors, as they lie in space, into the library's idealised orientation (columns). */
  readonly standardRotation: Mat3
  /** The tolerance that the library came to use, a length. It lowers the asked one in silence. */
  readonly tolerance: number
}

export interface LibraryFailure {
  readonly failure: string
}

export interface SpaceGroupType {
  readonly number: number
  readonly symbol: string
  readonly fullSymbol: string
  /** Hermann–Mauguin symbol of the point group. */
  readonly pointGroup: string
  /** Pearson symbol of the lattice, e.g. `oS`. */
  readonly lattice: string
}

export interface SpaceGroupSetting {
  readonly hallNumber: number
  readonly number: number
  /** Short and full symbols with blanks between directions and `_` before a screw's subscript. */
  readonly symbol: string
  readonly fullSymbol: string
  readonly centring: string
  readonly hallSymbol: string
  /** What tells settings of one type apart: `b1`, `-c2`, `H`, `R`, `1`, `2cab` …; empty where there is one only. */
  readonly choice: string
}

/** How often the library was asked and the most atoms it was handed; tests read it, the program does not. */
export const libraryUse = { calls: 0, mostAtoms: 0 }

let current: WebAssembly.Exports | undefined
let startAgain: (() => void) | undefined

/**
 * Start the library from the bytes of its WebAssembly module. A second call does nothing.
 * @throws WebAssembly.CompileError when the bytes are no such module (a fault of the installation, never of a file).
 */
export function loadSymmetryLibrary(bytes: Uint8Array): void {
  if (current) return
  const module = new WebAssembly.Module(bytes as Uint8Array<ArrayBuffer>)
  const real = WebAssembly.Instance
  // The package starts once and keeps what it got for ever, while a panic inside leaks stack until nothing works any
  // more. So it is handed an instance whose exports look up the one in use, which can be replaced.
  class Replaceable {
    readonly exports: WebAssembly.Exports
    constructor(of: WebAssembly.Module, imports: WebAssembly.Imports) {
      const start = () => {
        const stale = current?.memory as WebAssembly.Memory | undefined
        current = new real(of, imports).exports
        // Growing by nothing detaches the old buffer, by which the package sees that its views are stale.
        stale?.grow(0)
      }
      start()
      startAgain = () => {
        start()
        ;(current!.__wbindgen_start as () => void)()
      }
      this.exports = new Proxy({}, { get: (_, name) => current![name as string] })
    }
  }
  WebAssembly.Instance = Replaceable as unknown as typeof WebAssembly.Instance
  try {
    initSync({ module })
  } finally {
    WebAssembly.Instance = real
  }
}

export const symmetryLibraryLoaded = (): boolean => current !== undefined

/**
 * Ask the library for the symmetry of a cell.
 * @param tolerance a length in the unit of `basis`.
 * Anything unfit, and any failure inside the library, is a value with a reason.
 */
export function analyseCell(cell: LibraryCell, tolerance: number): LibraryAnswer | LibraryFailure {
  const failure = unfit(cell, tolerance)
  if (failure) return { failure }
  const text = JSON.stringify({
    lattice: { basis: cell.basis.flat() },
    positions: cell.positions,
    numbers: cell.species,
  })
  return analyseUnchecked(text, tolerance, cell.positions.length)
}

/** The bare call, for inputs that are known to be fit. A panic inside costs the instance, not the program. */
export function analyseUnchecked(
  text: string,
  tolerance: number,
  atoms: number,
): LibraryAnswer | LibraryFailure {
  if (!current) return { failure: 'the symmetry library has not been started' }
  libraryUse.calls++
  libraryUse.mostAtoms = Math.max(libraryUse.mostAtoms, atoms)
  try {
    const found = analyze_cell(text, tolerance, 'Standard')
    return {
      number: found.number,
      hallNumber: found.hall_number,
      operations: found.operations.map(operationFrom),
      orbits: found.orbits,
      siteSymmetry: found.site_symmetry_symbols,
      wyckoffLetters: found.wyckoffs,
      lattice: found.pearson_symbol.replace(/\d+$/, ''),
      // Its columns are the standard vectors, so the column-major list read by rows is what we want.
      standardFromCell: rowsOf(found.std_linear),
      standardOrigin: found.std_origin_shift,
      standardRotation: columnsOf(found.std_rotation_matrix),
      tolerance: found.symprec,
    }
  } catch (error) {
    if (error instanceof WebAssembly.RuntimeError) startAgain!()
    return { failure: `the symmetry library gave up: ${String(error).replace(/^moyo error: /, '')}` }
  }
}

/** The space-group type of a number from 1 to 230. The library must have been started. */
export function spaceGroupType(number: number): SpaceGroupType {
  const type = space_group_type(number)
  return {
    number,
    symbol: type.hm_short,
    fullSymbol: type.hm_full,
    pointGroup: type.geometric_crystal_class,
    lattice: type.bravais_class,
  }
}

/** All tabulated settings of a space-group type, the standard one not necessarily first. */
export function spaceGroupSettings(number: number): readonly SpaceGroupSetting[] {
  return hall_symbol_entries_from_number(number).map(entry => ({
    hallNumber: entry.hall_number,
    number: entry.number,
    symbol: entry.hm_short,
    fullSymbol: entry.hm_full,
    centring: entry.centering,
    hallSymbol: entry.hall_symbol,
    choice: entry.setting,
  }))
}

/** All operations of a space group in a setting, those of the centring among them. */
export const settingOperations = ({ number, hallNumber }: SpaceGroupSetting): readonly Operation[] =>
  operations_from_number(number, { type: 'HallNumber', value: hallNumber }, false).map(operationFrom)

/** The distinct rotations of a space group on columns of fractions of its conventional cell in that setting. */
export function settingRotations(setting: SpaceGroupSetting): readonly Mat3[] {
  const operations = operations_from_number(
    setting.number,
    { type: 'HallNumber', value: setting.hallNumber },
    false,
  )
  const distinct = new Map(operations.map(({ rotation }) => [rotation.join(), columnsOf(rotation)]))
  return [...distinct.values()]
}

/** Why a cell must not be handed over: each of these makes the library panic or answer wrongly. */
function unfit({ basis, positions, species }: LibraryCell, tolerance: number): string | undefined {
  if (positions.length === 0) return 'there are no atoms'
  if (positions.length !== species.length) return 'there are not as many kinds as positions'
  if (!species.every(kind => Number.isInteger(kind) && kind > 0 && kind < 2 ** 31))
    return 'a kind of atom is no positive whole number'
  const numbers = [...basis.flat(), ...positions.flat(), tolerance]
  if (!numbers.every(Number.isFinite)) return 'a number is not finite'
  if (!(tolerance > 0)) return 'the tolerance is not positive'
  if (candidateImages(basis, tolerance) > MOST_IMAGES)
    return 'the cell is so long and thin that too many lattice vectors are alike within the tolerance'
  return undefined
}

/**
 * About how many triples of lattice vectors have the lengths of the basis within the tolerance: the library looks at
 * each of them, and cannot be interrupted. Counted by the volumes of the three shells.
 */
function candidateImages(basis: Mat3, tolerance: number): number {
  const volume = Math.abs(determinant(basis))
  return basis.reduce((product, row) => product * (1 + (8 * Math.PI * dot(row, row) * tolerance) / volume), 1)
}

/** Ordinary cells have one or two; at a thousand a search takes some hundredths of a second, at a million minutes. */
const MOST_IMAGES = 1000

const operationFrom = ({ rotation, translation }: MoyoOperation): Operation => ({
  rotation: columnsOf(rotation),
  translation,
})

type Nine = readonly [number, number, number, number, number, number, number, number, number]

const rowsOf = (m: Nine): Mat3 => [
  [m[0], m[1], m[2]],
  [m[3], m[4], m[5]],
  [m[6], m[7], m[8]],
]

/** From the library's column-major list: entry (i, j) is m[i + 3j]. */
const columnsOf = (m: Nine): Mat3 => [
  [m[0], m[3], m[6]],
  [m[1], m[4], m[7]],
  [m[2], m[5], m[8]],
]
