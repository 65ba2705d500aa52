/** Space groups as people name them, and the rotations of a named group on a lattice that has no atoms to tell. */
import { type BravaisType, CENTRING_TABLES, type Centring } from './bravais.ts'
import { type LatticeType, orderOf, rotationAxes } from './lattice-type.ts'
import {
  type SpaceGroupSetting,
  settingRotations,
  spaceGroupSettings,
  spaceGroupType,
} from './symmetry-library.ts'
import {
  determinant,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  scale,
  transpose,
  type Vec3,
} from './vector.ts'

export interface NamedSpaceGroup {
  /** International Tables, 1–230. */
  readonly number: number
  /** Short Hermann–Mauguin symbol of the standard setting, as `Fm-3m`, `P6_3/mmc`. */
  readonly symbol: string
  /** Hermann–Mauguin symbol of the crystal class. */
  readonly pointGroup: string
  /** `oC`, `mC` for the one-face-centred types, whichever face. */
  readonly bravais: BravaisType
  /** The settings that the name can mean, likeliest first; all of the type where it is a number. */
  readonly settings: readonly SpaceGroupSetting[]
}

export const LAST_SPACE_GROUP = 230

/**
 * The space group that a number or a Hermann–Mauguin symbol names, in any tabulated setting and the usual spellings:
 * `Fm-3m`, `P 6_3/m m c`, `P63/mmc`, `P 1 21/n 1`, `P2_1/n`, `Pbnm`, `F 4/m -3 2/m`, `R-3m:H`, `Cmca` (before 1992: Cmce),
 * `Fm3m`. Case does not matter. Undefined where it names none. The symmetry library must have been started.
 */
export function namedSpaceGroup(name: number | string): NamedSpaceGroup | undefined {
  const both = typeof name === 'string' ? SYMBOL_AND_NUMBER.exec(name) : null
  if (both) {
    const group = namedSpaceGroup(both[1])
    return group?.number === Number(both[2]) ? group : undefined
  }
  const numeric = typeof name === 'number' ? name : /^\s*\d+\s*$/.test(name) ? Number(name) : undefined
  if (numeric !== undefined) {
    if (!Number.isInteger(numeric) || numeric < 1 || numeric > LAST_SPACE_GROUP) return undefined
    return describe(numeric, spaceGroupSettings(numeric))
  }
  const spelled = plainSpelling(String(name))
  const settings = index().get(spelled) ?? index().get(spelled.replace(/[hrsz]$/, ''))
  return settings && describe(settings[0].number, settings)
}

/** `Fd-3m (227)`, as papers and databases write it. */
export const SYMBOL_AND_NUMBER = /^\s*(.*\S)\s*\(\s*(?:no\.?\s*)?(\d+)\s*\)\s*$/i

/** Every symbol of the standard settings, for "did you mean". The symmetry library must have been started. */
export const spaceGroupSymbols = (): string[] =>
  Array.from({ length: LAST_SPACE_GROUP }, (_, i) => compactSymbol(spaceGroupType(i + 1).symbol))

/** `F m -3 m` → `Fm-3m`. */
export const compactSymbol = (symbol: string): string => symbol.replaceAll(' ', '')

/** `oS` → `oC`. */
export const bravaisOf = (lattice: string): BravaisType => lattice.replace('S', 'C') as BravaisType

function describe(number: number, settings: readonly SpaceGroupSetting[]): NamedSpaceGroup {
  const { symbol, pointGroup, lattice } = spaceGroupType(number)
  return { number, symbol: compactSymbol(symbol), pointGroup, bravais: bravaisOf(lattice), settings }
}

/** Without what only sets a symbol: blanks, subscripts, bars over digits, the choice of origin or axes. */
function plainSpelling(symbol: string): string {
  return symbol
    .replace(/\\(?:bar|overline)\s*\{?(\d)\}?/g, '-$1')
    .replace(/(\d)[\u0304\u0305]/g, '-$1')
    .replace(/[₁₂₃₄₅]/g, digit => String('₀₁₂₃₄₅'.indexOf(digit)))
    .replace(/[−–]/g, '-')
    .replace(/:.*$/, '')
    .replace(/[\s_{}$()]/g, '')
    .toLowerCase()
}

let known: Map<string, SpaceGroupSetting[]> | undefined

/** All spellings of all settings. A spelling keeps the number that it was first given. */
function index(): Map<string, SpaceGroupSetting[]> {
  if (known) return known
  const spellings = new Map<string, SpaceGroupSetting[]>()
  for (let number = 1; number <= LAST_SPACE_GROUP; number++)
    for (const setting of spaceGroupSettings(number))
      for (const spelling of new Set(spellingsOf(setting).map(plainSpelling))) {
        const settings = spellings.get(spelling)
        if (!settings) spellings.set(spelling, [setting])
        else if (settings[0].number === number) settings.push(setting)
      }
  known = spellings
  return spellings
}

function spellingsOf({ symbol, fullSymbol, number }: SpaceGroupSetting): string[] {
  const spellings = [fullSymbol, symbol]
  const directions = fullSymbol.split(' ')
  // Monoclinic symbols are written without the two directions that carry nothing, in any setting.
  if (directions.length === 4 && directions.filter(d => d === '1').length === 2 && number <= LAST_MONOCLINIC)
    spellings.push(directions.filter(d => d !== '1').join(' '))
  // "e" has stood for a double glide plane since 1992; before, one of its two glides was named.
  for (const spelling of [symbol, fullSymbol]) {
    const parts = spelling.split(' ')
    const at = parts.findIndex(part => part.endsWith('e'))
    if (at < 1) continue
    const glides = ['a', 'b', 'c'].filter((_, axis) => axis !== at - 1)
    for (const glide of glides)
      spellings.push(parts.map((part, i) => (i === at ? part.replace('e', glide) : part)).join(' '))
  }
  // Short cubic symbols did without the minus until 1983 (Fm3m).
  if (number >= FIRST_CUBIC) spellings.push(symbol.replace('-3', '3'))
  return spellings
}

const LAST_MONOCLINIC = 15
const FIRST_CUBIC = 195

/**
 * The rotations that a named group has on a lattice, on columns of fractions of the primitive vectors, identity first;
 * undefined where the lattice cannot carry the group. Where several orientations are possible (the axis of a tetragonal
 * group on a cubic lattice), the conventional axes decide, then the order of the axes.
 * @param conventionalFromPrimitive the cell that the name's axes are meant to be, rows of whole numbers.
 */
export function groupOnLattice(
  group: NamedSpaceGroup,
  type: LatticeType,
  conventionalFromPrimitive: Mat3 = type.conventionalFromPrimitive,
): Mat3[] | undefined {
  const holohedry = new Set(type.holohedry.map(String))
  const cells = [conventionalFromPrimitive, type.conventionalFromPrimitive]
  for (const cell of cells)
    for (const axes of orders(cell))
      for (const setting of group.settings) {
        const rotations = carried(setting, axes, holohedry)
        if (rotations) return rotations
      }
  if (group.number <= LAST_MONOCLINIC) return lowSymmetry(group, type)
  // The lattice is more symmetric than the group needs, and the group's axes are other ones than the lattice's own.
  const directions = rotationAxes(type.holohedry)
  for (const a of directions)
    for (const b of directions)
      for (const c of directions) {
        const rotations = carried(group.settings[0], [a, b, c], holohedry)
        if (rotations) return rotations
      }
  return undefined
}

/** The three axes in every order, right-handed or not as they came. */
const orders = ([a, b, c]: Mat3): Mat3[] => [
  [a, b, c],
  [b, c, a],
  [c, a, b],
  [b, a, negate(c)],
  [a, c, negate(b)],
  [c, b, negate(a)],
]

const negate = (v: Vec3): Vec3 => scale(v, -1)

/** The rotations of a setting whose axes are these, where centring and rotations are the lattice's. */
function carried(setting: SpaceGroupSetting, axes: Mat3, holohedry: ReadonlySet<string>): Mat3[] | undefined {
  const { numerators, denominator, points } = CENTRING_TABLES[setting.centring as Centring]
  if (Math.abs(determinant(axes)) !== points) return undefined
  if (
    !multiply(numerators, axes)
      .flat()
      .every(x => x % denominator === 0)
  )
    return undefined
  const there = transpose(axes)
  const back = inverse(there)
  const rotations = settingRotations(setting).map(W =>
    mapMatrix(multiply(multiply(there, W), back), x => Math.round(x) + 0),
  )
  return rotations.every(W => holohedry.has(String(W))) ? rotations : undefined
}

/** Triclinic and monoclinic groups need one 2-fold axis at most; the cell across it does not matter. */
function lowSymmetry(
  { number, pointGroup, bravais }: NamedSpaceGroup,
  { holohedry }: LatticeType,
): Mat3[] | undefined {
  const inversion = mapMatrix(IDENTITY, x => -x + 0)
  if (number <= LAST_TRICLINIC) return pointGroup === '1' ? [IDENTITY] : [IDENTITY, inversion]
  // A 2-fold rotation is the unit matrix modulo 2 where its axis and the plane across it span the lattice.
  const isPrimitive = (W: Mat3) => W.every((row, i) => row.every((x, j) => (x - IDENTITY[i][j]) % 2 === 0))
  const turn = holohedry.find(
    W => determinant(W) === 1 && orderOf(W) === 2 && isPrimitive(W) === (bravais === 'mP'),
  )
  if (!turn) return undefined
  const mirror = mapMatrix(turn, x => -x + 0)
  if (pointGroup === '2') return [IDENTITY, turn]
  return pointGroup === 'm' ? [IDENTITY, mirror] : [IDENTITY, turn, inversion, mirror]
}

const LAST_TRICLINIC = 2
