/** What a data block of a CIF says about a crystal: cell, operations, sites, names. Data names: CIF core dictionary. */
import { elementOf } from '../../crystal/elements.ts'
import { type CellParameters, isLattice, latticeFromCell } from '../../crystal/lattice.ts'
import {
  type Operation,
  settingOperations,
  type SpaceGroupSetting,
  spaceGroupSettings,
} from '../../crystal/symmetry-library.ts'
import { LAST_SPACE_GROUP, namedSpaceGroup } from '../../crystal/space-group.ts'
import { apply, combine, inverse, type Mat3, type Vec3 } from '../../crystal/vector.ts'
import { operationsOfHall } from './hall.ts'
import {
  closed,
  groupNumber,
  IDENTITY_OPERATION,
  metricMiss,
  operationKey,
  parseTriplet,
  writeTriplet,
} from './operations.ts'
import {
  type CifBlock,
  type CifItem,
  type CifNumber,
  type CifValue,
  numberOf,
  type Place,
  shown,
} from './syntax.ts'

/** Something that the person who imports must know. */
export interface Remark {
  /** `loss`: the lattice file is another crystal than the CIF's, or may be. `note`: good to know. */
  readonly level: 'loss' | 'note'
  readonly message: string
  readonly place?: Place
}

export interface CifSite {
  readonly label: string
  readonly element: string
  /** Fractions of the cell. */
  readonly position: Vec3
  /** Digits after the point, of each number. */
  readonly decimals: Vec3
  readonly occupancy: number
  readonly place: Place
}

export interface CifCrystal {
  readonly block: string
  readonly cell: Readonly<Record<keyof CellParameters, CifNumber>>
  /** Of the cell; a along x, b in the xy-plane. */
  readonly rows: Mat3
  /** A group modulo lattice vectors, identity first, those of the centring among them. */
  readonly operations: readonly Operation[]
  /** What the operations make, 1–230. */
  readonly group?: number
  /** The Hermann–Mauguin symbol as the CIF has it. */
  readonly symbol?: string
  readonly sites: readonly CifSite[]
  readonly title?: string
  /** Temperature, references: a line each. */
  readonly facts: readonly string[]
  /** Elements and their numbers in the whole cell, by formula and Z, where both are stated. */
  readonly contents?: ReadonlyMap<string, number>
  readonly remarks: readonly Remark[]
}

/** Why a block is no crystal. */
export interface NoCrystal extends Place {
  readonly failure: string
}

class Failure extends Error {
  constructor(
    readonly place: Place,
    message: string,
  ) {
    super(message)
  }
}

/** A block that says nothing of a cell describes no crystal: `global_` data, a publication, a powder pattern. */
export const hasCell = ({ items }: CifBlock): boolean => items.has('_cell_length_a')

/** The symmetry library must have been started. */
export function readCrystal(block: CifBlock): CifCrystal | NoCrystal {
  const fault = block.faults[0]
  if (fault) return { failure: fault.message, line: fault.line, column: fault.column }
  try {
    return new BlockReader(block).read()
  } catch (error) {
    if (!(error instanceof Failure)) throw error
    return { failure: error.message, ...error.place }
  }
}

const CELL: readonly (readonly [keyof CellParameters, string])[] = [
  ['a', '_cell_length_a'],
  ['b', '_cell_length_b'],
  ['c', '_cell_length_c'],
  ['alpha', '_cell_angle_alpha'],
  ['beta', '_cell_angle_beta'],
  ['gamma', '_cell_angle_gamma'],
]
const OPERATIONS = ['_space_group_symop_operation_xyz', '_symmetry_equiv_pos_as_xyz']
const MAGNETIC_OPERATIONS = ['_space_group_symop_magn_operation_xyz', '_space_group_symop_magn_centering_xyz']
const NUMBERS = ['_space_group_it_number', '_symmetry_int_tables_number']
const HM_SYMBOLS = [
  '_space_group_name_h-m_alt',
  '_symmetry_space_group_name_h-m',
  '_space_group_name_h-m_full',
  '_space_group_name_h-m_ref',
]
const HALL_SYMBOLS = ['_space_group_name_hall', '_symmetry_space_group_name_hall']
const TITLES = [
  '_chemical_name_common',
  '_chemical_name_mineral',
  '_chemical_name_systematic',
  '_chemical_formula_structural',
  '_chemical_formula_sum',
]
const FACTS: readonly (readonly [words: string, unit: string, names: readonly string[]])[] = [
  ['Measured at', ' K', ['_cell_measurement_temperature', '_diffrn_ambient_temperature']],
  ['Measured at', ' kPa', ['_cell_measurement_pressure', '_diffrn_ambient_pressure']],
  ['DOI', '', ['_journal_paper_doi', '_citation_doi']],
]

/** A rotation of a refined cell misses its metric by rounding only; by more than this part of a length it is another's. */
const LARGEST_MISS = 0.02
/** Stated and computed volumes of one cell differ by roundings of six parameters. */
const VOLUME_MISS = 0.01
/** More atoms than any file of ours should list. */
const MOST_SITES = 100_000
const MOST_OPERATIONS = 2000

interface StatedGroup {
  readonly number: number
  readonly words: string
  readonly place: Place
  readonly settings: readonly Setting[]
}

interface Setting {
  /** Computed when asked for. */
  readonly operations: readonly Operation[]
  readonly name: string
  /** Of two choices of the origin, the one at a centre of symmetry. */
  readonly centred?: boolean
}

const tabulated = (setting: SpaceGroupSetting): Setting => ({
  get operations() {
    return closed(settingOperations(setting)) ?? []
  },
  name: setting.fullSymbol + (setting.choice ? ` (${setting.choice})` : ''),
  centred: setting.choice.startsWith('2'),
})

class BlockReader {
  readonly #remarks: Remark[] = []
  constructor(private readonly block: CifBlock) {}

  read(): CifCrystal {
    const { block } = this
    const cell = this.#cell()
    const values = Object.fromEntries(
      CELL.map(([key]) => [key, cell[key].value]),
    ) as unknown as CellParameters
    const lattice = latticeFromCell(values, 'P', 3)
    if (!isLattice(lattice)) this.#fail(cell.a, 'no cell has these lengths and angles')
    this.#judgeVolume(lattice.volume)
    const rows = lattice.conventional
    const sites = this.#sites(rows)
    const { operations, group } = this.#symmetry(rows, sites, values)
    this.#judgeRest()
    return {
      block: block.name,
      cell,
      rows,
      operations,
      group,
      symbol: this.#text(HM_SYMBOLS),
      sites,
      title: this.#text(TITLES),
      facts: this.#facts(),
      contents: this.#contents(),
      remarks: this.#remarks,
    }
  }

  #fail(place: Place, message: string): never {
    throw new Failure(place, message)
  }

  #remark(level: Remark['level'], message: string, place?: Place): void {
    this.#remarks.push({
      level,
      message,
      ...(place ? { place: { line: place.line, column: place.column } } : {}),
    })
  }

  /** The first of several data names that is there and says anything. */
  #item(names: readonly string[]): CifItem | undefined {
    const items = names.map(name => this.block.items.get(name))
    return items.find(item => item?.values.some(isSaid))
  }

  #value(names: readonly string[]): CifValue | undefined {
    return this.#item(names)?.values.find(isSaid)
  }

  #text(names: readonly string[]): string | undefined {
    const text = this.#value(names)?.text.replace(/\s+/g, ' ').trim()
    return text || undefined
  }

  #cell(): CifCrystal['cell'] {
    const found = CELL.map(([key, name]) => {
      const item = this.block.items.get(name)
      const value = item?.values[0]
      const number = value && numberOf(value)
      if (number) return [key, number]
      if (value && isSaid(value))
        this.#fail(value, `${item.name} is ${shown(value.text)}, which is no number`)
      // The dictionary's default for an angle is a right one.
      if (key.length > 1) {
        const { line, column } = item ?? this.block
        return [key, { value: 90, decimals: 0, digits: '90', text: '90', line, column }]
      }
      return this.#fail(item ?? this.block, `${name} is not stated`)
    })
    return Object.fromEntries(found)
  }

  #judgeVolume(volume: number): void {
    const stated = this.#value(['_cell_volume'])
    const number = stated && numberOf(stated)
    if (number && Math.abs(number.value - volume) > VOLUME_MISS * volume)
      this.#remark(
        'note',
        `_cell_volume is ${number.text}, the cell's parameters make ${volume.toFixed(2)} Å³`,
        number,
      )
  }

  // Symmetry.

  #symmetry(rows: Mat3, sites: readonly CifSite[], cell: CellParameters) {
    const stated = this.#stated()
    const listed = this.#listed()
    const operations = listed ?? this.#fromTables(stated, rows, sites)
    const miss = metricMiss(
      operations.map(o => o.rotation),
      rows,
    )
    if (miss.by > LARGEST_MISS * Math.min(cell.a, cell.b, cell.c)) {
      const fault = writeTriplet({ rotation: miss.rotation, translation: [0, 0, 0] })
      this.#fail(
        this.#item(OPERATIONS) ?? this.block,
        `the operations do not fit the cell: ${fault} would make lengths equal that differ by ${miss.by.toFixed(3)} Å`,
      )
    }
    const group = groupNumber(operations)
    if (group !== undefined && stated && stated.number !== group)
      this.#remark(
        'loss',
        `the CIF states ${stated.words}, space group ${stated.number}, but its operations make number ${group}; the operations were used`,
        stated.place,
      )
    return { operations, group }
  }

  /** The listed operations as a group; undefined where none are listed. */
  #listed(): readonly Operation[] | undefined {
    const item = this.#item(OPERATIONS)
    const magnetic = item ? [] : MAGNETIC_OPERATIONS.flatMap(name => this.#item([name]) ?? [])
    if (!item && magnetic.length === 0) return undefined
    if (magnetic.length > 0)
      this.#remark('loss', 'the symmetry of a magnetic structure is taken without time reversal', magnetic[0])
    const values = item ? item.values : magnetic.flatMap(({ values }) => values)
    if (values.length > MOST_OPERATIONS)
      this.#fail(values[0], `${values.length} symmetry operations are no space group`)
    const listed = values.filter(isSaid).map(value => {
      const text = item ? value.text : value.text.replace(/,\s*[+-]1\s*$/, '')
      return (
        parseTriplet(text) ??
        this.#fail(value, `${shown(value.text)} is no symmetry operation such as -x,y+1/2,-z`)
      )
    })
    const group = closed(listed)
    if (!group) this.#fail(values[0], 'the symmetry operations make no group')
    const known = new Set([...listed, IDENTITY_OPERATION].map(operationKey))
    if (group.length > known.size && magnetic.length === 0)
      this.#remark(
        'loss',
        `the list of symmetry operations is not complete: ${known.size} are listed, and they make ${group.length}, which were used`,
        values[0],
      )
    return group
  }

  /** What the CIF states by number or symbol. */
  #stated(): StatedGroup | undefined {
    const symbolValue = this.#value(HM_SYMBOLS)
    const hallValue = this.#value(HALL_SYMBOLS)
    const numberValue = this.#value(NUMBERS)
    const hall = hallValue && operationsOfHall(hallValue.text)
    const hallNumber = hall && groupNumber(hall)
    const named = symbolValue && settingsOfSymbol(symbolValue.text)
    const number = numberValue && numberOf(numberValue)?.value
    const numbered =
      number !== undefined && number >= 1 && number <= LAST_SPACE_GROUP && Number.isInteger(number)
    if (symbolValue && !named)
      this.#remark(
        'note',
        `the symbol ${shown(symbolValue.text)} names no space group that is known here`,
        symbolValue,
      )
    if (hall && hallNumber !== undefined && (!numbered || hallNumber === number))
      return {
        number: hallNumber,
        words: shown(hallValue.text),
        place: hallValue,
        settings: [{ operations: hall, name: '' }],
      }
    if (named && symbolValue) {
      if (numbered && named[0].number !== number)
        this.#remark(
          'note',
          `the symbol ${shown(symbolValue.text)} is number ${named[0].number}, and the CIF says ${number}`,
          symbolValue,
        )
      return {
        number: named[0].number,
        words: shown(symbolValue.text),
        place: symbolValue,
        settings: named.map(tabulated),
      }
    }
    if (numbered && numberValue)
      return {
        number,
        words: 'number',
        place: numberValue,
        settings: spaceGroupSettings(number).map(tabulated),
      }
    return undefined
  }

  /** The operations of the stated group in the setting that fits cell and atoms. */
  #fromTables(stated: StatedGroup | undefined, rows: Mat3, sites: readonly CifSite[]): readonly Operation[] {
    if (!stated) {
      const symbol = this.#value([...HM_SYMBOLS, ...HALL_SYMBOLS])
      if (symbol)
        this.#fail(
          symbol,
          `${shown(symbol.text)} is no space group that is known here, and no operations are listed`,
        )
      this.#remark(
        'loss',
        'neither operations nor a space group are stated: P 1 is assumed, every atom stands for itself',
      )
      return [IDENTITY_OPERATION]
    }
    const shortest = Math.min(...rows.map(row => Math.hypot(...row)))
    const fitting = stated.settings.flatMap(({ operations, name, centred }) => {
      const turns = operations.map(o => o.rotation)
      const fits = turns.length > 0 && metricMiss(turns, rows).by <= LARGEST_MISS * shortest
      return fits ? [{ operations, name, order: centred ? 0 : 1 }] : []
    })
    if (fitting.length === 0)
      this.#fail(stated.place, `no setting of ${stated.words}, space group ${stated.number}, fits the cell`)
    const [best] = fitting
      .map(each => ({ ...each, atoms: atomsUnder(each.operations, rows, sites) }))
      .sort((p, q) => p.atoms - q.atoms || p.order - q.order)
    if (fitting.length > 1)
      this.#remark(
        'loss',
        `no operations are listed, and ${stated.words} (space group ${stated.number}) has ${fitting.length} settings that fit the cell: ${best.name} was taken, which makes fewest atoms`,
        stated.place,
      )
    return best.operations
  }

  // Atoms.

  #column(name: string): readonly CifValue[] | undefined {
    return this.block.items.get(name)?.values
  }

  /** Three columns, or one of lists (CIF 2.0). */
  #coordinates(name: string): readonly (readonly CifValue[] | undefined)[] {
    const lists = this.#column(`${name}_xyz`)?.map(itemsOf)
    return ['x', 'y', 'z'].map(
      (axis, i) => this.#column(`${name}_${axis}`) ?? lists?.flatMap(list => list[i] ?? []),
    )
  }

  #sites(rows: Mat3): readonly CifSite[] {
    const labels = this.#column('_atom_site_label') ?? this.#column('_atom_site_id')
    const types = this.#column('_atom_site_type_symbol')
    const fractional = this.#coordinates('_atom_site_fract')
    const cartesian = this.#coordinates('_atom_site_cartn')
    const isFractional = fractional.every(column => column !== undefined)
    const columns = (isFractional ? fractional : cartesian) as readonly (readonly CifValue[])[]
    const names = labels ?? types
    if (!names || !columns.every(column => column !== undefined)) {
      this.#remark('loss', 'no atoms are listed: the lattice file has none')
      return []
    }
    const count = Math.min(names.length, ...columns.map(column => column.length))
    if (count > MOST_SITES) this.#fail(names[0], `${count} sites; ${MOST_SITES} are read at most`)
    const toFractions = isFractional ? undefined : this.#fromCartesian(rows)
    const occupancies = this.#column('_atom_site_occupancy')
    const flags = this.#column('_atom_site_calc_flag')
    const assemblies = this.#column('_atom_site_disorder_assembly')
    const groups = this.#column('_atom_site_disorder_group')
    const attached = this.#column('_atom_site_attached_hydrogens')
    const formula = new Set(this.#formula()?.keys())
    const sites: (CifSite & { readonly assembly: string; readonly group: string })[] = []
    let hydrogens = 0
    const deuterium: string[] = []
    for (let i = 0; i < count; i++) {
      const label = names[i].text
      const place = { line: names[i].line, column: names[i].column }
      if (flags?.[i]?.text === 'dum') {
        this.#remark('note', `${shown(label)} is a dummy site and was left out`, place)
        continue
      }
      const numbers = columns.map(column => numberOf(column[i]))
      const bad = numbers.findIndex(number => !number)
      if (bad >= 0) {
        const value = columns[bad][i]
        if (isSaid(value)) this.#fail(value, `${shown(label)}: ${shown(value.text)} is no number`)
        this.#remark('loss', `${shown(label)} has no coordinates and was left out`, place)
        continue
      }
      const type = types?.[i] && isSaid(types[i]) ? types[i].text : undefined
      const element = elementIn(type ?? label, type === undefined, formula)
      if (!element) {
        this.#remark(
          'loss',
          `${shown(label)}: ${shown(type ?? label)} is no chemical element; the site was left out`,
          place,
        )
        continue
      }
      if (element.isotope) deuterium.push(label)
      const occupancy = occupancies?.[i] && isSaid(occupancies[i]) ? numberOf(occupancies[i]) : undefined
      if (occupancies?.[i] && isSaid(occupancies[i]) && !occupancy)
        this.#fail(
          occupancies[i],
          `${shown(label)}: the occupancy ${shown(occupancies[i].text)} is no number`,
        )
      const stated = numbers.map(number => number!.value) as unknown as Vec3
      if (!stated.every(x => Math.abs(x) < LARGEST_COORDINATE))
        this.#fail(columns[0][i], `${shown(label)} lies beyond all measure`)
      if (occupancy && occupancy.value > MOST_OCCUPANCY)
        this.#remark(
          'loss',
          `${shown(label)} has occupancy ${occupancy.text}, more than one atom on a site; it was kept as one`,
          place,
        )
      hydrogens += Number(attached?.[i]?.text) || 0
      sites.push({
        label,
        element: element.symbol,
        position: toFractions ? toFractions(stated) : stated,
        decimals: numbers.map(number => number!.decimals) as unknown as Vec3,
        occupancy: occupancy?.value ?? 1,
        place,
        assembly: said(assemblies?.[i]),
        group: said(groups?.[i]),
      })
    }
    if (deuterium.length > 0) this.#remark('note', `deuterium (${listed(deuterium)}) is written as H`)
    if (hydrogens > 0)
      this.#remark(
        'loss',
        `${hydrogens} hydrogen atoms are attached to others and have no coordinates: they are missing`,
      )
    return this.#ordered(sites)
  }

  /** Of each disordered assembly the group that is occupied most. */
  #ordered(
    sites: readonly (CifSite & { readonly assembly: string; readonly group: string })[],
  ): readonly CifSite[] {
    const shares = new Map<string, Map<string, { sum: number; count: number }>>()
    for (const { assembly, group, occupancy } of sites) {
      if (group === '' || group.startsWith('-')) continue
      const groups = shares.get(assembly) ?? new Map()
      shares.set(assembly, groups)
      const share = groups.get(group) ?? { sum: 0, count: 0 }
      groups.set(group, { sum: share.sum + occupancy, count: share.count + 1 })
    }
    const kept = new Map<string, string>()
    for (const [assembly, groups] of shares) {
      const means = [...groups].map(([group, { sum, count }]) => ({ group, mean: sum / count }))
      kept.set(assembly, means.reduce((most, each) => (each.mean > most.mean ? each : most)).group)
    }
    const isLeftOut = ({ assembly, group }: { assembly: string; group: string }) =>
      group !== '' && !group.startsWith('-') && kept.get(assembly) !== group
    const left = sites.filter(isLeftOut)
    if (left.length > 0)
      this.#remark(
        'loss',
        `disorder: of each assembly the group that is occupied most was kept; left out: ${listed(left.map(({ label }) => label))}`,
        left[0].place,
      )
    const about = sites.filter(({ group }) => group.startsWith('-'))
    if (about.length > 0)
      this.#remark(
        'loss',
        `disorder about a special position: every image of ${listed(about.map(({ label }) => label))} was kept, which are alternatives`,
        about[0].place,
      )
    return sites.filter(site => !isLeftOut(site))
  }

  /** Cartesian Å to fractions, by the matrix that the CIF states or else the usual axes. */
  #fromCartesian(rows: Mat3): (x: Vec3) => Vec3 {
    const matrix = this.#matrix('_atom_sites_fract_tran_matrix', '_atom_sites_fract_tran_vector')
    if (matrix) return x => add(apply(matrix.linear, x), matrix.shift)
    const back = this.#matrix('_atom_sites_cartn_tran_matrix', '_atom_sites_cartn_tran_vector')
    if (back) {
      const linear = inverse(back.linear)
      if (!linear.flat().every(Number.isFinite))
        this.#fail(this.block, '_atom_sites_Cartn_tran_matrix has no inverse')
      return x => apply(linear, add(x, [-back.shift[0], -back.shift[1], -back.shift[2]]))
    }
    this.#remark(
      'note',
      'Cartesian coordinates without a statement of their axes: a is taken along x, b in the xy-plane',
    )
    const toFractions = inverse(rows)
    return x => combine(x, toFractions)
  }

  #matrix(linearName: string, shiftName: string): { linear: Mat3; shift: Vec3 } | undefined {
    const number = (name: string) => {
      const value = this.#value([name])
      return value && numberOf(value)?.value
    }
    const linear = [1, 2, 3].map(i => [1, 2, 3].map(j => number(`${linearName}_${i}${j}`)))
    if (!linear.flat().every(x => x !== undefined)) return undefined
    const shift = [1, 2, 3].map(i => number(`${shiftName}_${i}`) ?? 0)
    return { linear: linear as unknown as Mat3, shift: shift as unknown as Vec3 }
  }

  // The rest.

  #formula(): ReadonlyMap<string, number> | undefined {
    const text = this.#text(['_chemical_formula_sum'])
    return text === undefined ? undefined : elementsOfFormula(text)
  }

  #contents(): ReadonlyMap<string, number> | undefined {
    const formula = this.#formula()
    const stated = this.#value(['_cell_formula_units_z'])
    const units = stated && numberOf(stated)?.value
    if (!formula || !units) return undefined
    return new Map([...formula].map(([element, n]) => [element, n * units]))
  }

  #facts(): string[] {
    const facts = FACTS.flatMap(([words, unit, names]) => {
      const value = this.#text(names)
      return value === undefined ? [] : [`${words} ${value}${unit}`]
    })
    for (const [name, item] of this.block.items) {
      const code = /database_code(?:_(.+))?$/.exec(name)
      const value = item.values.find(isSaid)
      if (code && value)
        facts.push(`${item.name.replace(/^_/, '')} ${value.text.replace(/\s+/g, ' ').trim()}`)
    }
    return facts
  }

  #judgeRest(): void {
    const { items } = this.block
    const has = (start: string) =>
      [...items].find(([name, item]) => name.startsWith(start) && item.values.some(isSaid))?.[1]
    const modulated = has('_cell_modulation_dimension') ?? has('_cell_wave_vector') ?? has('_space_group_ssg')
    if (modulated)
      this.#remark(
        'loss',
        'the structure is modulated: only the average structure was carried over',
        modulated,
      )
    const moments = has('_atom_site_moment')
    if (moments) this.#remark('loss', 'magnetic moments were not carried over', moments)
    const displaced = has('_atom_site_aniso')
    if (displaced) this.#remark('note', 'displacement parameters were not carried over', displaced)
  }
}

const LARGEST_COORDINATE = 1e6
/** Occupancies are refined to some hundredths: 1.01 is a full site. */
const MOST_OCCUPANCY = 1.05

const add = (u: Vec3, v: Vec3): Vec3 => [u[0] + v[0], u[1] + v[1], u[2] + v[2]]

const isSaid = ({ kind, text }: CifValue): boolean =>
  kind !== 'unknown' && kind !== 'inapplicable' && text.trim() !== ''
const said = (value: CifValue | undefined): string => (value && isSaid(value) ? value.text.trim() : '')

/** Three places of a list without lists in it; of anything else, three times the whole, which is no number. */
function itemsOf(value: CifValue): readonly CifValue[] {
  const items = value.kind === 'compound' ? value.text.trim().split(/\s+/) : []
  return items.length === 3 ? items.map(text => ({ ...value, kind: 'bare', text })) : [value, value, value]
}

const MOST_LISTED = 8
/** `O1, O2, O3 and 5 more` */
export const listed = (labels: readonly string[]): string =>
  labels.length <= MOST_LISTED
    ? labels.map(shown).join(', ')
    : `${labels.slice(0, MOST_LISTED).map(shown).join(', ')} and ${labels.length - MOST_LISTED} more`

/** `Na Cl`, `C6 H12 O6`, `Fe0.94 O` → numbers by element, D among H; undefined where a word is none of such. */
function elementsOfFormula(text: string): ReadonlyMap<string, number> | undefined {
  const numbers = new Map<string, number>()
  for (const word of text.trim().split(/\s+/)) {
    const found = /^([A-Z][a-z]?)(\d*\.?\d*)$/.exec(word)
    const symbol = found?.[1] === 'D' ? 'H' : found?.[1]
    if (!found || !symbol || !elementOf(symbol)) return undefined
    numbers.set(symbol, (numbers.get(symbol) ?? 0) + (found[2] === '' ? 1 : Number(found[2])))
  }
  return numbers
}

/**
 * The element of a type symbol (`Fe3+`, `O2-`, `D`) or, without one, of a label (`Fe1`, `CA2`, `OW`). Of a label in
 * capitals the formula decides between one letter and two (`HO1`: hydrogen, not holmium, in a hydrate).
 */
export function elementIn(
  text: string,
  isLabel: boolean,
  formula: ReadonlySet<string>,
): { symbol: string; isotope: boolean } | undefined {
  const letters = /^[A-Za-z]+/.exec(text.trim())?.[0] ?? ''
  if (/^wat/i.test(letters)) return { symbol: 'O', isotope: false }
  const two = letters.length > 1 ? letters[0].toUpperCase() + letters[1].toLowerCase() : ''
  const one = letters.slice(0, 1).toUpperCase()
  const isProper = two === letters.slice(0, 2)
  const order = isLabel && !isProper && formula.has(one) && !formula.has(two) ? [one, two] : [two, one]
  const preferred = isLabel && formula.size > 0 ? [...order.filter(s => formula.has(s)), ...order] : order
  for (const symbol of preferred) {
    if (symbol === 'D' || symbol === 'T') return { symbol: 'H', isotope: true }
    if (elementOf(symbol) && (isLabel || symbol.length === letters.length)) return { symbol, isotope: false }
  }
  return undefined
}

/** `F m -3 m`, `R -3 m :H`, `F d -3 m S`: the settings that a symbol can mean, by the choice that it names. */
function settingsOfSymbol(text: string): readonly SpaceGroupSetting[] | undefined {
  // Remarks in braces are found in older files: R 3 c {hexagonal axes}.
  const symbol = text
    .replace(/\{.*\}/, '')
    .replace(/\s+/g, ' ')
    .trim()
  const named = namedSpaceGroup(symbol)
  if (!named) return undefined
  const mark = /(?::\s*|\s)([12hrsz])\s*(?:\(.*\))?$/i.exec(symbol)?.[1]?.toUpperCase()
  const choice = mark === 'S' ? '1' : mark === 'Z' ? '2' : mark
  const chosen = named.settings.filter(setting => setting.choice.toUpperCase() === choice)
  if (chosen.length > 0 && choice) return chosen
  // P 21/c is the usual name of its type in any setting, and first of all the name of one setting.
  const spelled = spelling(symbol)
  const own = named.settings.filter(({ fullSymbol }) =>
    [fullSymbol, fullSymbol.replace(/ 1(?= |$)/g, '')].some(full => spelling(full) === spelled),
  )
  return own.length > 0 ? own : named.settings
}
const spelling = (symbol: string): string => symbol.replace(/[\s_]|:.*$/g, '').toLowerCase()

/** Closer images than this, in Å, of one atom are one: it is on a special position. */
const SPECIAL = 0.05

/** How many atoms operations make of sites, images within `SPECIAL` counted once. */
function atomsUnder(operations: readonly Operation[], rows: Mat3, sites: readonly CifSite[]): number {
  return sites.slice(0, MOST_TRIED).reduce((sum, { position }) => {
    const staying = operations.filter(({ rotation, translation }) => {
      const moved = add(apply(rotation, position), translation)
      const away = moved.map((x, i) => x - position[i] - Math.round(x - position[i])) as unknown as Vec3
      return Math.hypot(...combine(away, rows)) < SPECIAL
    }).length
    return sum + operations.length / staying
  }, 0)
}
const MOST_TRIED = 200
