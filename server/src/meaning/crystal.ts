/**
 * What a document means: lattice, zone, atoms, symmetry, label book, points and path, each computed when first asked
 * for. What cannot be computed is `undefined`; the rules then stay silent about it.
 */
import type { BookMatch } from '../books/match.ts'
import { matchBook } from '../books/match.ts'
import type { BravaisType } from '../crystal/bravais.ts'
import { kRotations } from '../crystal/kspace.ts'
import { cellParameters, type Dimension, type Lattice } from '../crystal/lattice.ts'
import { emptySlab } from '../crystal/neighbours.ts'
import {
  groupOnLattice,
  type LatticeType,
  latticeType,
  namedSpaceGroup,
  type Symmetry,
} from '../crystal/symmetry.ts'
import { IN_ANGSTROM, type Unit } from '../crystal/units.ts'
import {
  add,
  combine,
  distance,
  inverse,
  type Mat3,
  multiply,
  scale,
  subtract,
  type Vec3,
} from '../crystal/vector.ts'
import { buildZone, type Zone } from '../crystal/zone.ts'
import type {
  AtomEntry,
  LatticeDocument,
  PathPiece,
  PathSegment,
  PointEntry,
  VectorValue,
} from '../format/model.ts'
import { anyFace, buildLattice, distortedLattice, type LatticeBuild } from './lattice-build.ts'
import { lazy } from './lazy.ts'
import type { Rotations, SymmetryOutcome, Workshop } from './workshop.ts'

/** Default tolerance, in Å: looser than the last digit of a refined structure, tighter than a real distortion. */
export const DEFAULT_TOLERANCE = 0.001
/** Default spacing of sampled path points, in Å⁻¹. */
export const DEFAULT_SPACING = 0.02

export interface PlacedAtom {
  readonly entry: AtomEntry
  /** Ordinal in the file, from 0. */
  readonly index: number
  readonly element: string
  /** Atoms of one element and one name are of one kind. */
  readonly kind: number
  /** The numbers as stated, in the file's frame. */
  readonly stated: Vec3
  /** Fractions of the primitive vectors (along a non-periodic direction: of its unit normal, a length). */
  readonly fraction: Vec3
  readonly cartesian: Vec3
}

export interface PlacedPoint {
  readonly label: string
  readonly origin: 'file' | 'book'
  readonly entry?: PointEntry
  /** Fractions of the primitive reciprocal vectors. */
  readonly fraction: Vec3
  readonly cartesian: Vec3
}

export interface PlacedSegment {
  readonly segment: PathSegment
  readonly from?: PlacedPoint
  readonly to?: PlacedPoint
  /** In inverse units of the file's length; undefined where an end is not known. */
  readonly length?: number
}

export interface PlacedPiece {
  readonly piece: PathPiece
  readonly points: readonly (PlacedPoint | undefined)[]
  readonly segments: readonly PlacedSegment[]
}

export class Crystal {
  constructor(
    readonly document: LatticeDocument,
    private readonly workshop: Workshop,
  ) {}

  get unit(): Unit {
    return this.document.unit
  }

  /** Å per unit of length of the file. */
  get angstrom(): number {
    return IN_ANGSTROM[this.document.unit]
  }

  /** In the file's unit. */
  get tolerance(): number {
    return this.document.tolerance?.value ?? DEFAULT_TOLERANCE / this.angstrom
  }

  readonly #build = lazy(() => buildLattice(this.document))
  get build(): LatticeBuild {
    return this.#build()
  }

  get dimension(): Dimension | undefined {
    return this.#build().dimension
  }

  get lattice(): Lattice | undefined {
    return this.#build().lattice
  }

  readonly #zone = lazy((): Zone | undefined => {
    const { lattice } = this
    if (!lattice) return undefined
    return this.workshop.zones.get(String(lattice.dimension), flat(lattice.reciprocal), () =>
      buildZone(lattice.reciprocal, lattice.dimension),
    )
  })
  get zone(): Zone | undefined {
    return this.#zone()
  }

  /** The Bravais type that the primitive vectors have within the file's tolerance. */
  readonly #type = lazy((): LatticeType | undefined => {
    const { lattice } = this
    return lattice && this.typeOf(lattice.primitive, lattice.dimension)
  })
  get type(): LatticeType | undefined {
    return this.#type()
  }

  /** The Bravais type of any set of vectors, by default within the file's tolerance. */
  typeOf(vectors: Mat3, dimension: Dimension, tolerance = this.tolerance): LatticeType | undefined {
    return this.workshop.types.get(`${dimension}`, flat(vectors, tolerance), () =>
      latticeType(vectors, dimension, tolerance),
    )
  }

  /** The Bravais type that the file states, else the one found. */
  get bravais(): BravaisType | undefined {
    return this.document.lattice?.bravais?.value ?? this.type?.bravais
  }

  readonly #atoms = lazy((): readonly PlacedAtom[] => {
    const { lattice, document } = this
    if (!lattice || !document.atoms) return []
    const toPrimitive = inverse(lattice.primitive)
    const kinds = new Map<string, number>()
    const placed: PlacedAtom[] = []
    document.atoms.items.forEach((entry, index) => {
      const stated = triple(entry.position)
      if (!stated || !entry.element) return
      const cartesian = this.atomCartesian(stated)
      const key = `${entry.element.value}/${entry.name?.value ?? ''}`
      const kind = kinds.get(key) ?? kinds.set(key, kinds.size).size - 1
      placed.push({
        entry,
        index,
        element: entry.element.value,
        kind,
        stated,
        cartesian,
        fraction: combine(cartesian, toPrimitive),
      })
    })
    return placed
  })
  /** The atoms that could be read, in the order of the file. */
  get atoms(): readonly PlacedAtom[] {
    return this.#atoms()
  }

  /** True where every atom of the file could be read: rules that need the whole crystal ask this first. */
  get atomsComplete(): boolean {
    return this.atoms.length === (this.document.atoms?.items.length ?? 0)
  }

  /**
   * The widest slab without atoms between planes of the other two primitive vectors, for each of the three, in the
   * file's unit: a vacuum across b₃ is the third. undefined without atoms and along a non-periodic direction.
   */
  readonly #emptySlabs = lazy((): readonly (number | undefined)[] => {
    const { lattice } = this
    if (!lattice) return [undefined, undefined, undefined]
    const { primitive: basis, dimension } = lattice
    const positions = this.atoms.map(atom => atom.fraction)
    return ([0, 1, 2] as const).map(i =>
      i < dimension ? emptySlab({ basis, dimension, positions }, i) : undefined,
    )
  })
  get emptySlabs(): readonly (number | undefined)[] {
    return this.#emptySlabs()
  }

  /** Cartesian place of stated atom coordinates; the lattice must be there. */
  atomCartesian(stated: Vec3): Vec3 {
    return combine(stated, this.atomAxes)
  }

  /** The axes that the file's atom coordinates refer to, one a row. */
  readonly #atomAxes = lazy((): Mat3 => this.atomAxesOf(this.document.frames.atoms))
  get atomAxes(): Mat3 {
    return this.#atomAxes()
  }

  /** The axes that atom coordinates refer to in a frame; the lattice must be there. */
  atomAxesOf(frame: LatticeDocument['frames']['atoms']): Mat3 {
    const lattice = this.lattice!
    if (frame === 'cartesian') return CARTESIAN
    const rows = frame === 'primitive' ? lattice.primitive : lattice.conventional
    const height = this.document.lattice?.height?.value
    if (lattice.dimension !== 2 || height === undefined) return rows
    return [rows[0], rows[1], scale(rows[2], height)]
  }

  /** The axes that the file's k-point coordinates refer to, one a row; undefined where the frame needs a missing `a`. */
  readonly #pointAxes = lazy((): Mat3 | undefined => {
    const { lattice, document } = this
    return lattice && this.axesOfFrame(document.frames.points)
  })
  get pointAxes(): Mat3 | undefined {
    return this.#pointAxes()
  }

  axesOfFrame(frame: LatticeDocument['frames']['points']): Mat3 | undefined {
    const { lattice, document } = this
    if (!lattice) return undefined
    if (frame === 'primitive') return lattice.reciprocal
    if (frame === 'conventional') return lattice.conventionalReciprocal
    if (frame === 'cartesian') return CARTESIAN
    const a = document.lattice?.parameters.a?.value
    if (!a) return undefined
    const g = (2 * Math.PI) / a
    return [
      [g, 0, 0],
      [0, g, 0],
      [0, 0, g],
    ]
  }

  /** Cartesian k to fractions of the primitive reciprocal vectors: k·aᵢ/2π. The lattice must be there. */
  fractionOf(cartesian: Vec3): Vec3 {
    return combine(cartesian, this.#fromCartesian())
  }
  readonly #fromCartesian = lazy(() => inverse(this.lattice!.reciprocal))

  cartesianOf(fraction: Vec3): Vec3 {
    return combine(fraction, this.lattice!.reciprocal)
  }

  readonly #outcome = lazy(
    (): SymmetryOutcome =>
      this.atomsComplete
        ? this.searchWith(this.atoms)
        : { state: 'failed', reason: 'an atom could not be read' },
  )

  /** The search for the symmetry of this lattice with the atoms as they are, or as another reading has them. */
  searchWith(
    atoms: readonly Pick<PlacedAtom, 'fraction' | 'kind'>[],
    tolerance = this.tolerance,
  ): SymmetryOutcome {
    const { lattice } = this
    if (!lattice) return { state: 'failed', reason: 'the lattice could not be built' }
    const numbers = new Float64Array(10 + 4 * atoms.length)
    numbers.set(lattice.primitive.flat())
    numbers[9] = tolerance
    atoms.forEach((atom, i) => {
      numbers.set(atom.fraction, 10 + 4 * i)
      numbers[13 + 4 * i] = atom.kind
    })
    const find = () =>
      this.workshop.symmetry.find({
        dimension: lattice.dimension,
        primitive: lattice.primitive,
        positions: atoms.map(atom => atom.fraction),
        species: atoms.map(atom => atom.kind),
        tolerance,
      })
    const { symmetries } = this.workshop
    return symmetries.get(String(lattice.dimension), numbers, find, job => !job.dropped).outcome
  }

  /** Symmetry of lattice and atoms; of the lattice alone where there are no atoms. */
  get symmetry(): Symmetry | undefined {
    const outcome = this.#outcome()
    return outcome.state === 'found' ? outcome.symmetry : undefined
  }
  get symmetryOutcome(): SymmetryOutcome {
    return this.#outcome()
  }

  readonly #rotations = lazy((): Rotations | undefined => {
    const { symmetry, document } = this
    if (!symmetry) return undefined
    const claimed = document.atoms ? undefined : this.#claimedRotations()
    return (
      claimed ?? {
        matrices: symmetry.rotations,
        pointGroup: symmetry.pointGroup,
        spaceGroup: symmetry.spaceGroup?.number,
      }
    )
  })
  /** The crystal's rotations: of lattice and atoms; without atoms of the claimed space group, else of the lattice. */
  get rotations(): Rotations | undefined {
    return this.#rotations()
  }

  #claimedRotations(): Rotations | undefined {
    const { lattice, type, document } = this
    const group = document.spaceGroup && namedSpaceGroup(document.spaceGroup.value)
    if (!group || !lattice || !type || lattice.dimension !== 3) return undefined
    return this.workshop.claims.get(
      String(document.spaceGroup!.value),
      flat(lattice.primitive, this.tolerance),
      () => {
        const matrices = groupOnLattice(group, type, lattice.conventionalFromPrimitive)
        return matrices && { matrices, pointGroup: group.pointGroup, spaceGroup: group.number }
      },
    )
  }

  /** The k-group of the crystal: distinct matrices on columns of primitive k-fractions. */
  readonly #kGroup = lazy((): readonly Mat3[] | undefined => {
    const { rotations, lattice, document } = this
    return rotations && lattice && kGroupOf(rotations.matrices, document.timeReversal, lattice.dimension)
  })
  get kGroup(): readonly Mat3[] | undefined {
    return this.#kGroup()
  }

  /** The same for the lattice alone, by which labels are matched. */
  readonly #holohedry = lazy((): readonly Mat3[] | undefined => {
    const { type, lattice } = this
    return type && lattice && kGroupOf(type.holohedry, true, lattice.dimension)
  })
  get holohedry(): readonly Mat3[] | undefined {
    return this.#holohedry()
  }

  /** The label book in force, carried into this lattice. */
  readonly #book = lazy((): BookMatch | undefined => {
    const { lattice, document } = this
    if (!lattice || document.labels === 'none') return undefined
    return this.bookMatch(document.labels)
  })
  get book(): BookMatch | undefined {
    return this.#book()
  }

  /** The atoms keep a lower Bravais type than the lattice has, as far as is known. */
  get isLessSymmetric(): boolean {
    return this.atoms.length > 0 && this.symmetry?.bravais !== this.type?.bravais
  }

  /**
   * The type that labels go by: that of the lattice, but of the file where it states a lower one and the atoms keep no
   * more. The polar axis of a tetragonal crystal is another direction than its a, even where c = a.
   */
  readonly #labelType = lazy((): LatticeType | undefined => {
    const { type, lattice, build, document } = this
    const stated = document.lattice?.bravais?.value
    if (!type || !lattice || !stated || !build.cell || !this.isLessSymmetric) return type
    if (anyFace(stated) !== this.symmetry?.bravais || anyFace(stated) === type.bravais) return type
    const distorted = distortedLattice(stated, build.cell)
    const lower = distorted && this.typeOf(distorted.primitive, lattice.dimension)
    if (!lower) return type
    const conventional = multiply(lower.conventionalFromPrimitive, lattice.primitive)
    return { ...lower, conventional, cell: cellParameters(conventional) }
  })

  /** A book carried into this lattice, or into another one of the same crystal. */
  bookMatch(book: Exclude<LatticeDocument['labels'], 'none'>, lattice = this.lattice): BookMatch | undefined {
    const own = lattice === this.lattice
    const type = own ? this.#labelType() : lattice && this.typeOf(lattice.primitive, lattice.dimension)
    if (!lattice || !type) return undefined
    const { pointGroup, spaceGroup } = this.rotations ?? {}
    const { tolerance } = this
    return this.workshop.matches.get(
      `${book}/${lattice.dimension}/${type.bravais}/${spaceGroup ?? pointGroup}`,
      flat(lattice.primitive, tolerance),
      () =>
        matchBook(book, lattice.primitive, lattice.dimension, {
          tolerance,
          spaceGroup,
          pointGroup,
          latticeType: type,
        }),
    )
  }

  readonly #bookPoints = lazy((): ReadonlyMap<string, PlacedPoint> => {
    const points = this.book?.points ?? []
    return new Map(
      points.map(({ label, fraction }) => [
        label,
        { label, origin: 'book', fraction, cartesian: this.cartesianOf(fraction) },
      ]),
    )
  })
  /** The points of the label book in force. */
  get bookPoints(): ReadonlyMap<string, PlacedPoint> {
    return this.#bookPoints()
  }

  readonly #filePoints = lazy((): ReadonlyMap<string, PlacedPoint> => {
    const { document, lattice } = this
    const placed = new Map<string, PlacedPoint>()
    if (!document.points || !lattice) return placed
    const entries = new Map(document.points.items.map(entry => [entry.label, entry]))
    const open = new Set<string>()
    const resolve = (label: string): PlacedPoint | undefined => {
      const entry = entries.get(label)
      if (!entry) return this.bookPoints.get(label)
      const known = placed.get(label)
      if (known || open.has(label)) return known
      open.add(label)
      const cartesian = entry.between
        ? this.#between(entry.between, resolve)
        : this.#stated(entry.coordinates)
      open.delete(label)
      if (!cartesian) return undefined
      const point: PlacedPoint = {
        label,
        origin: 'file',
        entry,
        cartesian,
        fraction: this.fractionOf(cartesian),
      }
      placed.set(label, point)
      return point
    }
    for (const label of entries.keys()) resolve(label)
    return new Map(
      [...entries.keys()].flatMap(label => (placed.has(label) ? [[label, placed.get(label)!]] : [])),
    )
  })
  /** The file's own points that could be placed, in the order of the file. */
  get points(): ReadonlyMap<string, PlacedPoint> {
    return this.#filePoints()
  }

  #between(
    between: NonNullable<PointEntry['between']>,
    resolve: (label: string) => PlacedPoint | undefined,
  ): Vec3 | undefined {
    const from = resolve(between.ends[0].label)
    const to = resolve(between.ends[1].label)
    if (!from || !to || !between.fraction) return undefined
    return add(from.cartesian, scale(subtract(to.cartesian, from.cartesian), between.fraction.value))
  }

  #stated(coordinates: VectorValue | undefined): Vec3 | undefined {
    const numbers = this.componentsInSpace(coordinates)
    return numbers && this.pointAxes && combine(numbers, this.pointAxes)
  }

  /**
   * The components of a k-vector of the file, filled up to three. undefined where a number is malformed, the count is
   * wrong, or a component stands along a non-periodic direction.
   */
  componentsInSpace(vector: VectorValue | undefined): Vec3 | undefined {
    const { dimension } = this
    if (!vector || !dimension) return undefined
    const { items } = vector
    if (items.length < dimension || items.length > 3) return undefined
    const numbers = [0, 0, 0]
    for (const [i, item] of items.entries()) {
      if (!item || (i >= dimension && item.value !== 0)) return undefined
      numbers[i] = item.value
    }
    return numbers as unknown as Vec3
  }

  /** What a label means here: the file's own point, else the book's. */
  pointOf(label: string): PlacedPoint | undefined {
    return this.points.get(label) ?? (this.fileDefines(label) ? undefined : this.bookPoints.get(label))
  }

  /** The file has an entry of this label, readable or not. */
  fileDefines(label: string): boolean {
    return this.#defined().has(label)
  }
  readonly #defined = lazy(() => new Set(this.document.points?.items.map(entry => entry.label)))

  readonly #pieces = lazy((): readonly PlacedPiece[] => {
    const pieces = this.document.path?.pieces ?? []
    return pieces.map(piece => {
      const points = piece.labels.map(label => this.pointOf(label.label))
      const segments = piece.segments.map(segment => this.#placeSegment(segment))
      return { piece, points, segments }
    })
  })
  /** The path as written, with its points placed. A path `recommended` is in `book`. */
  get pieces(): readonly PlacedPiece[] {
    return this.#pieces()
  }

  #placeSegment(segment: PathSegment): PlacedSegment {
    const from = this.pointOf(segment.from.label)
    const to = this.pointOf(segment.to.label)
    return { segment, from, to, length: from && to && distance(from.cartesian, to.cartesian) }
  }

  /** Integer supercell matrix, rows as combinations of the primitive vectors; undefined where it cannot be read. */
  readonly #supercell = lazy((): Mat3 | undefined => {
    const { document, dimension } = this
    if (!document.supercell || !dimension) return undefined
    const rows = document.supercell.rows.map(row => row?.items.map(item => item?.value))
    const all = rows.flat()
    if (all.some(x => x === undefined || !Number.isInteger(x))) return undefined
    const numbers = rows as number[][]
    const entry = (i: number, j: number): number => {
      if (document.supercell!.diagonal) return i === j ? (numbers[0][i] ?? 1) : 0
      return numbers[i]?.[j] ?? (i === j ? 1 : 0)
    }
    return [0, 1, 2].map(i => [0, 1, 2].map(j => entry(i, j))) as unknown as Mat3
  })
  get supercell(): Mat3 | undefined {
    return this.#supercell()
  }
}

/** The workshop keeps rotations from edit to edit, and their k-groups are kept with them: [with time reversal, without]. */
const kGroups = new WeakMap<readonly Mat3[], (readonly Mat3[] | undefined)[]>()

function kGroupOf(rotations: readonly Mat3[], timeReversal: boolean, dimension: Dimension): readonly Mat3[] {
  const known = kGroups.get(rotations) ?? []
  kGroups.set(rotations, known)
  return (known[timeReversal ? 0 : 1] ??= kRotations(rotations, timeReversal, dimension))
}

const CARTESIAN: Mat3 = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
]

const flat = (rows: Mat3, ...more: number[]): Float64Array => Float64Array.from([...rows.flat(), ...more])

/** Three finite numbers, or undefined. */
function triple(vector: VectorValue | undefined): Vec3 | undefined {
  if (vector?.items.length !== 3 || vector.items.some(item => !item)) return undefined
  return vector.items.map(item => item!.value) as unknown as Vec3
}
