/** The lattice report: everything that one document means, as one plain object. Its shape is published in schema/report.json. */
import type { DocumentAnalysis } from '../analysis.ts'
import type { BookMatch } from '../books/match.ts'
import { littleCoGroup } from '../crystal/kspace.ts'
import type { Lattice } from '../crystal/lattice.ts'
import { countOrbits, isSymmetricMesh, type Mesh, meshPoints } from '../crystal/mesh.ts'
import { listedPoints, segmentSteps } from '../crystal/path.ts'
import { add, angle, type Mat3, norm, scale, subtract, type Vec3 } from '../crystal/vector.ts'
import { fold, placeInZone, zoneNumber } from '../crystal/zone.ts'
import type { ParameterName, Severity } from '../format/model.ts'
import type { Unit } from '../crystal/units.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { lineHere } from '../meaning/placing.ts'
import { meshesOf, stepRule, walkedPath } from '../meaning/sampling.ts'
import { type Tally, tally } from './findings-json.ts'

/** Lengths are in the file's unit, k in its inverse with 2π. Rows of matrices are vectors. */
export interface Report {
  readonly file: string
  readonly document: number
  readonly title?: string
  readonly unit: Unit
  /** A length: how far from symmetric still counted as symmetric. */
  readonly tolerance: number
  readonly lattice?: LatticeReport
  readonly reciprocal?: {
    readonly vectors: Rows
    readonly lengths: readonly number[]
    readonly angles: readonly number[]
  }
  readonly changes?: { readonly bookFromPrimitive?: Rows; readonly conventionalFromPrimitive: Rows }
  readonly zone?: ZoneReport
  readonly symmetry?: SymmetryReport
  /** The label book in force. */
  readonly book?: { readonly id: string; readonly source: string; readonly doubts?: readonly string[] }
  readonly points?: readonly PointReport[]
  readonly path?: PathReport
  /** The mesh, or the meshes by name where the file names them. */
  readonly mesh?: MeshReport | Readonly<Record<string, MeshReport>>
  readonly findings: Tally
}

type Rows = readonly (readonly number[])[]

export interface LatticeReport {
  readonly bravais?: string
  readonly dimension: 1 | 2 | 3
  /** Of the conventional cell: those that the dimension has. Degrees. */
  readonly parameters: Readonly<Partial<Record<ParameterName, number>>>
  /** The primitive vectors. */
  readonly vectors: Rows
  readonly conventional: Rows
  /** Of the primitive cell: a volume, an area or a length. */
  readonly volume: number
}

export interface ZoneReport {
  readonly solid: string
  /** Three dimensions only. */
  readonly faces?: number
  readonly edges: number
  readonly vertices: number
  readonly volume: number
  readonly inradius: number
  readonly circumradius: number
}

export interface SymmetryReport {
  /** Of lattice and atoms, in three dimensions; absent without atoms. */
  readonly spaceGroup?: { readonly number: number; readonly symbol: string }
  /** Of lattice and atoms, without atoms of the claimed space group, else of the lattice; absent for a chain. */
  readonly pointGroup?: string
  readonly rotations: number
  readonly timeReversal: boolean
  /** Distinct rotations on k, −1 among them where time reversal holds. */
  readonly kRotations: number
}

export interface PointReport {
  readonly label: string
  readonly origin: 'file' | 'book'
  /** Of the primitive reciprocal vectors. */
  readonly fraction: readonly number[]
  readonly cartesian: Vec3
  readonly length: number
  readonly place: 'inside' | 'boundary' | 'outside'
  /** Ordinal of the zone; null beyond the 100,000th. */
  readonly zone: number | null
  /** Fractions of the equivalent point in the first zone. */
  readonly folded: readonly number[]
  /** Rotations of the crystal's k-group that leave the point alone up to a reciprocal vector. */
  readonly littleCoGroup?: number
  /** Inequivalent points that the k-group makes of it. */
  readonly star?: number
}

export interface SegmentReport {
  readonly from: string
  readonly to: string
  readonly length: number
  /** Both ends counted. */
  readonly points: number
  /** Letter of the symmetry line that it runs along. */
  readonly line?: string
}

export interface PathReport {
  readonly pieces: readonly (readonly string[])[]
  /** Those whose two ends are known. */
  readonly segments: readonly SegmentReport[]
  /** Of the whole path, breaks left out; absent while an end is not known. */
  readonly length?: number
  /** As listed: joints once, both ends at a break. */
  readonly points?: number
}

export interface MeshReport {
  readonly divisions: readonly number[]
  /** In mesh steps. */
  readonly shift: readonly number[]
  readonly points: number
  /** Under the rotations that map the mesh onto itself. */
  readonly irreducible?: number
  /** Step along each reciprocal vector. */
  readonly spacing: readonly number[]
  /** All rotations of the k-group map the mesh onto itself. */
  readonly symmetric?: boolean
}

/**
 * @param file     the name as it was asked for.
 * @param findings those of this document.
 */
export function reportOf(
  file: string,
  { document, crystal }: DocumentAnalysis,
  findings: readonly { readonly severity: Severity }[],
): Report {
  const { lattice } = crystal
  return {
    file,
    document: document.number,
    ...given('title', document.title?.value),
    unit: document.unit,
    tolerance: crystal.tolerance,
    ...(lattice && {
      lattice: latticeReport(crystal, lattice),
      reciprocal: reciprocalReport(lattice),
      changes: {
        ...given('bookFromPrimitive', crystal.book && square(crystal.book.bookFromPrimitive, lattice)),
        conventionalFromPrimitive: square(lattice.conventionalFromPrimitive, lattice),
      },
      ...given('zone', zoneReport(crystal)),
      ...given('symmetry', symmetryReport(crystal)),
      ...given('book', crystal.book && bookReport(crystal.book)),
      points: [...crystal.points.values(), ...crystal.bookPoints.values()].flatMap(
        point => pointReport(crystal, point) ?? [],
      ),
      ...given('path', pathReport(crystal)),
      ...given('mesh', meshReport(crystal)),
    }),
    findings: tally(findings),
  }
}

/** A part of the report, or nothing where there is no ground for it. */
const given = <K extends string, V>(name: K, value: V | undefined): { [name in K]?: V } =>
  value === undefined ? {} : ({ [name]: value } as { [name in K]: V })

const PARAMETERS_OF = {
  1: ['a'],
  2: ['a', 'b', 'gamma'],
  3: ['a', 'b', 'c', 'alpha', 'beta', 'gamma'],
} as const

/** Lengths and angles of the conventional cell that belong to as many dimensions. */
export const latticeParameters = (lattice: Lattice): Partial<Record<ParameterName, number>> =>
  Object.fromEntries(PARAMETERS_OF[lattice.dimension].map(name => [name, lattice.parameters[name]]))

const periodic = (rows: Mat3, { dimension }: Lattice): Rows => rows.slice(0, dimension)
const square = (rows: Mat3, { dimension }: Lattice): Rows =>
  rows.slice(0, dimension).map(row => row.slice(0, dimension))

const latticeReport = (crystal: Crystal, lattice: Lattice): LatticeReport => ({
  ...given('bravais', crystal.bravais),
  dimension: lattice.dimension,
  parameters: latticeParameters(lattice),
  vectors: periodic(lattice.primitive, lattice),
  conventional: periodic(lattice.conventional, lattice),
  volume: lattice.volume,
})

function reciprocalReport(lattice: Lattice): NonNullable<Report['reciprocal']> {
  const vectors = lattice.reciprocal.slice(0, lattice.dimension)
  const pairs = {
    1: [],
    2: [[0, 1]],
    3: [
      [1, 2],
      [0, 2],
      [0, 1],
    ],
  }[lattice.dimension]
  return { vectors, lengths: vectors.map(norm), angles: pairs.map(([i, j]) => angle(vectors[i], vectors[j])) }
}

function zoneReport({ zone, dimension }: Crystal): ZoneReport | undefined {
  if (!zone) return undefined
  const { solid, faces, edges, vertices, volume, inradius, circumradius } = zone
  return {
    solid,
    ...(dimension === 3 ? { faces: faces.length } : {}),
    edges: edges.length,
    vertices: vertices.length,
    volume,
    inradius,
    circumradius,
  }
}

const bookReport = ({ book: id, source, doubts }: BookMatch) => ({
  id,
  source,
  ...(doubts.length > 0 ? { doubts } : {}),
})

function symmetryReport(crystal: Crystal): SymmetryReport | undefined {
  const { symmetry, rotations, kGroup, document } = crystal
  if (!symmetry || !rotations || !kGroup) return undefined
  const { spaceGroup } = symmetry
  return {
    ...(document.atoms && spaceGroup
      ? { spaceGroup: { number: spaceGroup.number, symbol: spaceGroup.symbol } }
      : {}),
    // Across a chain nothing repeats: what is found there is that of the two normals, not of the crystal.
    ...(crystal.dimension === 1 ? {} : { pointGroup: rotations.pointGroup }),
    rotations: rotations.matrices.length,
    timeReversal: document.timeReversal,
    kRotations: kGroup.length,
  }
}

function pointReport(
  crystal: Crystal,
  { label, origin, fraction, cartesian }: PlacedPoint,
): PointReport | undefined {
  const { zone, kGroup, dimension } = crystal
  if (!zone) return undefined
  const group = kGroup && littleCoGroup(fraction, kGroup).length
  return {
    label,
    origin,
    fraction: fraction.slice(0, dimension),
    cartesian,
    length: norm(cartesian),
    place: placeInZone(zone, cartesian).place,
    zone: zoneNumber(zone, cartesian) ?? null,
    folded: fold(zone, fraction).fraction.slice(0, dimension),
    ...(kGroup && group ? { littleCoGroup: group, star: kGroup.length / group } : {}),
  }
}

function pathReport(crystal: Crystal): PathReport | undefined {
  const pieces = walkedPath(crystal)
  if (pieces.length === 0) return undefined
  const known = pieces.flatMap(piece => piece.segments.filter(({ from, to }) => from && to))
  const complete = known.length === pieces.reduce((sum, { segments }) => sum + segments.length, 0)
  const steps = segmentSteps(
    known.map(({ length, steps: own }) => ({ length: length!, own })),
    stepRule(crystal),
  )
  const stepsOf = new Map(known.map((segment, i) => [segment, steps[i]]))
  const segments = known.map(
    ({ from, to, length }, i): SegmentReport => ({
      from: from!.label,
      to: to!.label,
      length: length!,
      points: steps[i] + 1,
      ...given('line', lineLetter(crystal, from!.cartesian, to!.cartesian)),
    }),
  )
  return {
    pieces: pieces.map(({ labels }) => labels),
    segments,
    ...(complete && {
      length: segments.reduce((sum, { length }) => sum + length, 0),
      points: listedPoints(pieces.map(({ segments }) => segments.map(segment => stepsOf.get(segment)!))),
    }),
  }
}

/** The book's letter for the symmetry line that a segment runs along. */
const lineLetter = (crystal: Crystal, from: Vec3, to: Vec3): string | undefined =>
  lineHere(crystal, add(from, scale(subtract(to, from), SOMEWHERE)))?.name
/** An irrational part of the way: no symmetry point lies there, and no line that the segment only crosses. */
const SOMEWHERE = (3 - Math.sqrt(5)) / 2

function meshReport(crystal: Crystal): Report['mesh'] {
  const meshes = meshesOf(crystal)
  if (meshes.length === 0) return undefined
  const [{ name, mesh }] = meshes
  if (name === undefined) return oneMesh(crystal, mesh)
  return Object.fromEntries(meshes.map(({ name, mesh }) => [name, oneMesh(crystal, mesh)]))
}

function oneMesh({ kGroup, lattice, dimension }: Crystal, mesh: Mesh): MeshReport {
  return {
    divisions: mesh.divisions.slice(0, dimension),
    shift: mesh.shift.slice(0, dimension),
    points: meshPoints(mesh),
    ...given('irreducible', kGroup && countOrbits(mesh, kGroup)),
    spacing: periodic(lattice!.reciprocal, lattice!).map((b, i) => norm(b as Vec3) / mesh.divisions[i]),
    ...given('symmetric', kGroup && isSymmetricMesh(mesh, kGroup)),
  }
}
