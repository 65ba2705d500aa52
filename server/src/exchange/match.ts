/** Whether a plain list of k-points is a file's path or mesh, and in which frame and unit. */
import { type CellRelation, relateCells } from '../crystal/cell-match.ts'
import {
  type Aligned,
  alignList,
  apart,
  guessMesh,
  meshIndex,
  meshMiss,
  type MeshSites,
  meshSites,
  pointAt,
  SiteGrid,
  transformed,
} from '../crystal/list-match.ts'
import { type Mesh, meshPoints } from '../crystal/mesh.ts'
import { IN_ANGSTROM, type Unit, UNITS } from '../crystal/units.ts'
import {
  dot,
  IDENTITY,
  inverse,
  type Mat3,
  mapMatrix,
  multiply,
  norm,
  scale,
  subtract,
  transpose,
  type Vec3,
} from '../crystal/vector.ts'
import { displayLabel } from '../format/path.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { lazy } from '../meaning/lazy.ts'
import { count, fractions, plain } from '../meaning/wording.ts'
import type { KList } from './k-list.ts'
import { MOST_MESH_POINTS } from './mesh-points.ts'
import { type KnownSegment, knownSegments, pathPlaces } from './path-points.ts'
import { meshesOf } from '../meaning/sampling.ts'

export type FaultKind = 'off' | 'missing' | 'doubled' | 'order' | 'weight'

export interface MatchFault {
  readonly kind: FaultKind
  /** Of the list, from 1; absent where the list lacks something. */
  readonly line?: number
  readonly message: string
  /** Å⁻¹. */
  readonly miss?: number
}

export interface Explanation {
  readonly target: 'path' | 'corners' | 'mesh'
  /** Of a named mesh. */
  readonly name?: string
  /** How the numbers are read; several where they are one and the same for this lattice. */
  readonly frames: readonly string[]
  readonly matches: boolean
  /** Points of the list that are one of the target's. */
  readonly fitting: number
  /** Points of the target. */
  readonly wanted: number
  readonly listing?: 'full' | 'irreducible' | 'partly reduced'
  /** Å⁻¹: of the points that fit, and what the digits of the list allow. */
  readonly largestMiss: number
  readonly tolerance: number
  readonly labels: readonly { readonly label: string; readonly lines: readonly number[] }[]
  readonly faults: readonly MatchFault[]
  readonly notes: readonly string[]
}

export interface CellJson {
  readonly related: boolean
  readonly matrix?: readonly (readonly number[])[]
  readonly of?: CellRelation['of']
  readonly determinant?: number
  readonly rotation?: {
    readonly matrix: Mat3
    readonly angle: number
    readonly axis?: Vec3
    readonly proper: boolean
  }
  /** Per cent; negative where the job's cell is the smaller. */
  readonly strain?: number
  /** The unit in which it would be a cell of the lattice. */
  readonly fitsIn?: Unit
}

export interface MatchJson {
  readonly matches: boolean
  /** Points that were read, and lines that were not. */
  readonly points: number
  readonly comments: number
  readonly skipped: readonly { readonly line: number; readonly text: string }[]
  readonly best?: Explanation
  /** Others that fit as well. */
  readonly others: readonly Pick<Explanation, 'target' | 'name' | 'frames' | 'listing'>[]
  /** Where it does not match: what comes nearest, in words. */
  readonly nearest?: string
  readonly cell?: CellJson
}

interface Reading {
  readonly names: string[]
  /** Rows: what one unit of each column is, Cartesian, in the file's inverse unit. */
  readonly axes: Mat3
}

type Target =
  | {
      readonly kind: 'path' | 'corners'
      /** Fractions, three a point. */
      readonly sequence: Float64Array
      /** Of joints and ends, by rising ordinals. */
      readonly labels: ReadonlyMap<number, string>
      /** Good for the coarsest numbers. */
      readonly grid: SiteGrid
    }
  | { readonly kind: 'mesh'; readonly name?: string; readonly sites: MeshSites }

/** Rounding of a double through a change of basis or two, in parts of the reciprocal vectors. */
const NOISE = 1e-8
/** Coarse numbers must still tell the symmetry points of a zone apart: no more than this part of the inradius. */
const COARSEST = 1 / 8
/** And a mesh point from its neighbours: no more than this part of a step. */
const PART_OF_STEP = 1 / 4
/** So many points decide which readings are looked at in full. */
const SAMPLE = 300
/** So many readings are, of a list this long. */
const FULL_READINGS = 8
const LONG = 5000
/** A reading that fits this part of the sample less than the best one is not looked at. */
const CLEARLY_WORSE = 0.3

/**
 * @param list undefined: only the cells are compared.
 * @param job  the vectors of the cell that was computed, in the file's unit of length.
 */
export function matchList(crystal: Crystal, list: KList | undefined, job?: readonly Vec3[]): MatchJson {
  const relations = job
    ? relateCells(crystal.lattice!.primitive, filled(job, crystal), crystal.dimension!)
    : []
  const cell = job && cellJson(relations[0], crystal.dimension!)
  if (!list) return { matches: cell!.related, points: 0, comments: 0, skipped: [], others: [], cell }
  const head = { points: list.count, comments: list.comments, skipped: list.skipped, cell }
  const readings = readingsOf(crystal, job, relations)
  const reach = Math.max(...readings.map(({ axes }) => digitsOf(list, axes)))
  const targets = targetsOf(crystal, Math.min(reach + noiseOf(crystal), COARSEST * crystal.zone!.inradius))
  const judges = targets.flatMap(target => readings.map(reading => new Judge(crystal, list, reading, target)))
  const step = Math.max(1, Math.floor(list.count / SAMPLE))
  const sample = Array.from({ length: Math.ceil(list.count / step) }, (_, n) => n * step)
  const screened = judges
    .map(judge => ({ judge, part: judge.fittingOf(sample) / sample.length }))
    .sort((a, b) => b.part - a.part)
  const best = screened[0]?.part ?? 0
  const explained = screened
    .filter(({ part }) => part > 0 && part >= best - CLEARLY_WORSE)
    .slice(0, list.count > LONG ? FULL_READINGS : undefined)
    .map(({ judge }) => judge.explain())
    .sort(byQuality)
  const [first, ...more] = explained
  const rest = more.filter(one =>
    first.matches ? one.matches : one.fitting === first.fitting && one.faults.length === first.faults.length,
  )
  const fits = first?.matches ?? false
  const others = rest.map(({ target, name, frames, listing }) => ({
    target,
    ...(name !== undefined && { name }),
    frames,
    ...(listing && { listing }),
  }))
  const near = fits
    ? undefined
    : (otherMeshInWords(crystal, list, readings) ?? nearestInWords(crystal, list, judges, best))
  return {
    ...head,
    matches: fits,
    ...(first && { best: { ...first, faults: worded(first.faults) } }),
    others,
    ...(near && { nearest: near }),
  }
}

/** Of many faults few are ever read: only those of the best reading are put into words. */
type Fault = Omit<MatchFault, 'message'> & { readonly say: () => string }
type Judgement = Omit<Explanation, 'faults'> & { readonly faults: readonly Fault[] }

const worded = (faults: readonly Fault[]): MatchFault[] =>
  [...faults]
    .sort((a, b) => (a.line ?? Number.POSITIVE_INFINITY) - (b.line ?? Number.POSITIVE_INFINITY) || 0)
    .map(({ kind, line, say, miss }) => ({
      kind,
      ...(line !== undefined && { line }),
      message: say(),
      ...(miss !== undefined && { miss }),
    }))

function byQuality(a: Judgement, b: Judgement): number {
  if (a.matches !== b.matches) return a.matches ? -1 : 1
  const part = ({ fitting, wanted, faults }: Judgement) => faults.length / Math.max(1, fitting, wanted)
  return (
    part(a) - part(b) || b.fitting - a.fitting || a.largestMiss / a.tolerance - b.largestMiss / b.tolerance
  )
}

/** What the digits of a list leave open in a reading: a whole last digit, since programs cut as well as round. */
const digitsOf = (list: KList, axes: Mat3): number =>
  axes.reduce((sum, axis, i) => sum + (list.digits[i] ?? 0) * norm(axis), 0)

const noiseOf = ({ lattice }: Crystal): number => NOISE * norm(lattice!.reciprocal[0])

/** The job's rows filled up by the crystal's normals. */
const filled = (rows: readonly Vec3[], { lattice, dimension }: Crystal): Mat3 =>
  [0, 1, 2].map(i => (i < dimension! ? rows[i] : lattice!.primitive[i])) as unknown as Mat3

function cellJson(relation: CellRelation | undefined, dimension: number): CellJson {
  if (!relation) return { related: false }
  const { matrix, of, determinant, turn, angle, axis, proper, strain } = relation
  return {
    related: true,
    matrix: matrix.slice(0, dimension).map(row => row.slice(0, dimension)),
    of,
    determinant,
    rotation: { matrix: turn, angle, ...(axis && { axis }), proper },
    strain: 100 * strain,
  }
}

/** A cell read in another unit is a better answer where it is no larger a supercell than this, and no more strained. */
const FOLD_OF_ANOTHER_UNIT = 16
const STRAIN_OF_ANOTHER_UNIT = 0.01
/** nm read as Å always look like a whole part of the lattice, 10 (a chain) to 1,000 times smaller: where it spares such a factor, the other unit is believed. */
const FOLD_SPARED = 10

/**
 * The unit that the job's vectors seem to be in, where it is not the one that they were read in.
 * @param job    in the file's unit, read in `unit`.
 * @param stated whether somebody said so: then it is doubted only where nothing fits.
 */
export function unitThatFits(
  crystal: Crystal,
  job: readonly Vec3[],
  unit: Unit,
  stated: boolean,
): Unit | undefined {
  const relate = (rows: readonly Vec3[]) =>
    relateCells(crystal.lattice!.primitive, filled(rows, crystal), crystal.dimension!)[0]
  const asRead = relate(job)
  if (asRead && (stated || Math.abs(asRead.determinant) < FOLD_SPARED)) return undefined
  return UNITS.find(other => {
    if (other === unit) return false
    const found = relate(job.map(row => scale(row, IN_ANGSTROM[other] / IN_ANGSTROM[unit])))
    return (
      found !== undefined &&
      Math.abs(found.determinant) <= FOLD_OF_ANOTHER_UNIT &&
      Math.abs(found.strain) <= STRAIN_OF_ANOTHER_UNIT &&
      (!asRead || Math.abs(asRead.determinant) >= FOLD_SPARED * Math.abs(found.determinant))
    )
  })
}

const times = (m: Mat3, s: number): Mat3 => mapMatrix(m, x => x * s)
const reciprocalOf = (rows: Mat3): Mat3 => times(transpose(inverse(rows)), 2 * Math.PI)

const UNIT_WORDS: Record<Unit, string> = { angstrom: 'Å⁻¹', nm: 'nm⁻¹', bohr: 'bohr⁻¹' }

/** Every frame and unit that people write k-points in; those that are the same for this lattice as one. */
function readingsOf(
  crystal: Crystal,
  job: readonly Vec3[] | undefined,
  relations: readonly CellRelation[],
): Reading[] {
  const { lattice, angstrom, document } = crystal
  const readings: Reading[] = []
  const add = (name: string, axes: Mat3) => {
    const same = readings.find(reading => isSame(reading.axes, axes))
    if (same) same.names.push(name)
    else readings.push({ names: [name], axes })
  }
  const { reciprocal, conventionalReciprocal, primitive, parameters } = lattice!
  add('fractions of the primitive reciprocal vectors', reciprocal)
  add('fractions of the conventional reciprocal vectors', conventionalReciprocal)
  const cartesians = (frame: Mat3, whose: string) => {
    for (const unit of UNITS) {
      const size = angstrom / IN_ANGSTROM[unit]
      add(`Cartesian${whose} in ${UNIT_WORDS[unit]} with the 2π`, times(frame, size))
      add(`Cartesian${whose} in ${UNIT_WORDS[unit]} without the 2π`, times(frame, 2 * Math.PI * size))
    }
  }
  const perLength = (a: number, frame: Mat3, whose: string) => {
    const shown = `a = ${plain(a * angstrom, 5)} Å`
    add(`Cartesian${whose} in 2π/a, ${shown}`, times(frame, (2 * Math.PI) / a))
    add(`Cartesian${whose} in 1/a with the 2π, ${shown}`, times(frame, 1 / a))
  }
  cartesians(IDENTITY, '')
  for (const a of new Set([
    document.lattice?.parameters.a?.value ?? parameters.a,
    parameters.a,
    norm(primitive[0]),
  ]))
    perLength(a, IDENTITY, '')
  for (const [i, { matrix, of, angle }] of relations.entries()) {
    const change = of === 'ours' ? matrix : inverse(matrix)
    const cell = reciprocalOf(multiply(change, primitive))
    // From the job's axes into ours, its strain taken out.
    const turned = multiply(inverse(reciprocalOf(filled(job!, crystal))), cell)
    const which = i === 0 ? '' : `, taken as turned by ${plain(angle, 2)}°`
    add(`fractions of the job cell's reciprocal vectors${which}`, cell)
    const whose = ` along the axes of the job${which}`
    cartesians(turned, whose)
    perLength(norm(job![0]), turned, whose)
  }
  return readings
}

const SAME_AXES = 1e-9
const isSame = (m: Mat3, n: Mat3): boolean =>
  m.every((row, i) => norm(subtract(row, n[i])) <= SAME_AXES * norm(row))

/** @param reach of the coarsest reading. */
function targetsOf(crystal: Crystal, reach: number): Target[] {
  const targets: Target[] = []
  const segments = knownSegments(crystal)
  const add = (kind: 'path' | 'corners', walked: readonly KnownSegment[]) => {
    const { fractions: sequence, labels } = pathPlaces(walked)
    const { reciprocal, primitive } = crystal.lattice!
    targets.push({ kind, sequence, labels, grid: new SiteGrid(sequence, reciprocal, primitive, reach) })
  }
  if (segments.length > 0 && segments.reduce((sum, { steps }) => sum + steps, 1) <= MOST_MESH_POINTS) {
    add('path', segments)
    if (segments.some(({ steps }) => steps > 1))
      add(
        'corners',
        segments.map(segment => ({ ...segment, steps: 1 })),
      )
  }
  const { kGroup } = crystal
  for (const { name, mesh } of kGroup ? meshesOf(crystal) : [])
    if (meshPoints(mesh) <= MOST_MESH_POINTS)
      targets.push({ kind: 'mesh', name, sites: meshSites(mesh, kGroup!) })
  return targets
}

/** One list read in one way, held against one target. */
class Judge {
  readonly #toFractions: Mat3
  /** In the file's inverse unit. */
  readonly tolerance: number

  constructor(
    private readonly crystal: Crystal,
    private readonly list: KList,
    readonly reading: Reading,
    readonly target: Target,
  ) {
    const { reciprocal, primitive, dimension } = crystal.lattice!
    this.#toFractions = multiply(reading.axes, times(transpose(primitive), 1 / (2 * Math.PI)))
    const most =
      target.kind === 'mesh'
        ? PART_OF_STEP *
          Math.min(
            ...[0, 1, 2].slice(0, dimension).map(i => norm(reciprocal[i]) / target.sites.mesh.divisions[i]),
          )
        : COARSEST * crystal.zone!.inradius
    this.tolerance = Math.min(digitsOf(list, reading.axes) + noiseOf(crystal), most)
  }

  /** Of all points of the list, or of some; three a point. */
  #fractions(points: Float64Array): Float64Array {
    const all = transformed(points, this.#toFractions)
    const { dimension } = this.crystal.lattice!
    // Where nothing is periodic nothing may fold: such a component stays under a half.
    for (let at = 0; at < all.length; at += 3)
      for (let axis = dimension; axis < 3; axis++) all[at + axis] /= 1 + 2 * Math.abs(all[at + axis])
    return all
  }

  /** The mesh that the list may be: whether it is shows when it is judged by it. */
  guess(): Mesh | undefined {
    const { dimension } = this.crystal.lattice!
    const rounding = [0, 1, 2].map(
      axis =>
        NOISE +
        this.#toFractions.reduce((sum, row, i) => sum + (this.list.digits[i] ?? 0) * Math.abs(row[axis]), 0),
    ) as unknown as Vec3
    return guessMesh(this.#fractions(this.list.points), rounding, dimension)
  }

  fittingOf(sample: readonly number[]): number {
    const { reciprocal } = this.crystal.lattice!
    const { target, tolerance, list } = this
    const all = this.#fractions(Float64Array.from(sample.flatMap(i => pointAt(list.points, i))))
    return sample.filter((_, n) => {
      const f = pointAt(all, n)
      return target.kind === 'mesh'
        ? meshMiss(target.sites.mesh, f, reciprocal) <= tolerance
        : target.grid.isNear(f, tolerance)
    }).length
  }

  explain(): Judgement {
    const { target } = this
    return target.kind === 'mesh' ? this.#explainMesh(target) : this.#explainPath(target)
  }

  /** In Å⁻¹. */
  #inverse(x: number): number {
    return x / this.crystal.angstrom
  }

  #far(x: number): string {
    return `${plain(this.#inverse(x), 6)} Å⁻¹`
  }

  #explainPath({ kind, sequence, labels, grid }: Extract<Target, { kind: 'path' | 'corners' }>): Judgement {
    const { list } = this
    const fractionsOfList = this.#fractions(list.points)
    const aligned = alignList(fractionsOfList, sequence, grid, this.tolerance)
    const notes: string[] = []
    const faults: Fault[] = []
    const { missing, strays } = this.#strays(aligned, fractionsOfList, sequence, labels, faults)
    let joints = 0
    for (const i of aligned.doubled) {
      const index = aligned.at[i]
      // Programs that run segment by segment say a joint twice.
      if (aligned.at[i - 1] === index && labels.has(index)) joints++
      else
        faults.push({
          kind: 'doubled',
          line: list.lines[i],
          say: () => `${placeOf(index, labels)} once more`,
        })
    }
    if (joints > 0)
      notes.push(`${count(joints, 'joint')} said twice, at the end of a segment and at the start of the next`)
    for (const i of aligned.misplaced)
      faults.push({
        kind: 'order',
        line: list.lines[i],
        say: () => `out of order: ${placeOf(aligned.at[i], labels)} stands here`,
      })
    for (const [from, to] of runsOf(missing)) {
      const where = () =>
        `${placeOf(from, labels)} ${fractions(pointAt(sequence, from), this.crystal.dimension)}`
      const say = () =>
        from === to
          ? `missing: ${where()}`
          : `missing: ${to - from + 1} points, from ${where()} to ${placeOf(to, labels)}`
      faults.push({ kind: 'missing', say })
    }
    const off = strays.length / list.count
    if (off > RESAMPLED && strays.every(i => this.#isOnSegment(pointAt(fractionsOfList, i))))
      faults.splice(0, faults.length, {
        kind: 'off',
        line: list.lines[strays[0]],
        say: () =>
          `every point lies on the path, ${strays.length} of them between its points: it was sampled with other steps`,
      })
    if (aligned.shifted > 0)
      notes.push(`${count(aligned.shifted, 'point')} in another zone: equal up to a reciprocal vector`)
    const lines = new Map<string, number[]>()
    for (const [i, index] of aligned.at.entries()) {
      const label = index < 0 ? undefined : labels.get(index)
      if (label === undefined) continue
      const told = lines.get(label)
      if (told) told.push(list.lines[i])
      else lines.set(label, [list.lines[i]])
      const own = list.labels.get(i)
      if (
        own !== undefined &&
        own !== label &&
        !(own === 'G' && label === 'Γ') &&
        !this.#isPlaced(own, pointAt(fractionsOfList, i))
      )
        notes.push(`line ${list.lines[i]} is labelled ${displayLabel(own)}; this is ${displayLabel(label)}`)
    }
    return this.#explanation(kind, faults, notes, {
      fitting: aligned.at.reduce((sum, index) => sum + (index >= 0 ? 1 : 0), 0),
      wanted: sequence.length / 3,
      largestMiss: aligned.miss.reduce((a, b) => Math.max(a, b), 0),
      labels: [...lines].map(([label, lines]) => ({ label, lines })),
    })
  }

  /** On a segment of the path as it stands, not beyond a reciprocal vector. */
  #isOnSegment(fraction: Vec3): boolean {
    const k = this.crystal.cartesianOf(fraction)
    return this.#segments().some(({ from, to, length }) => {
      if (length === 0) return false
      const along = subtract(to.cartesian, from.cartesian)
      const away = subtract(k, from.cartesian)
      const part = Math.max(0, Math.min(1, dot(away, along) / length ** 2))
      return norm(subtract(away, scale(along, part))) <= this.tolerance
    })
  }
  readonly #segments = lazy(() => knownSegments(this.crystal))

  /** One place may have two letters. */
  #isPlaced(label: string, fraction: Vec3): boolean {
    const point = this.crystal.pointOf(label)
    return (
      point !== undefined &&
      apart(point.fraction, fraction, this.crystal.lattice!.reciprocal) <= this.tolerance
    )
  }

  /** Points that are none of the sequence: which one was meant, by those before and after it. */
  #strays(
    aligned: Aligned,
    list: Float64Array,
    sequence: Float64Array,
    labels: ReadonlyMap<number, string>,
    faults: Fault[],
  ): { missing: readonly number[]; strays: readonly number[] } {
    const isMissing = new Uint8Array(sequence.length / 3)
    for (const index of aligned.missing) isMissing[index] = 1
    const strays: number[] = []
    let last = -1
    for (const [i, index] of aligned.at.entries()) {
      if (index >= 0) {
        last = index
        continue
      }
      strays.push(i)
      const meant = isMissing[last + 1] === 1 ? last + 1 : undefined
      if (meant !== undefined) {
        isMissing[meant] = 0
        last = meant
      }
      const miss =
        meant === undefined
          ? undefined
          : apart(pointAt(list, i), pointAt(sequence, meant), this.crystal.lattice!.reciprocal)
      faults.push({
        kind: 'off',
        line: this.list.lines[i],
        say: () =>
          miss === undefined
            ? 'fits no point of the path'
            : `${this.#far(miss)} off ${placeOf(meant!, labels)} ${fractions(pointAt(sequence, meant!), this.crystal.dimension)}`,
        ...(miss !== undefined && { miss: this.#inverse(miss) }),
      })
    }
    return { missing: aligned.missing.filter(index => isMissing[index] === 1), strays }
  }

  #explainMesh({ name, sites }: Extract<Target, { kind: 'mesh' }>): Judgement {
    const { list, tolerance } = this
    const { mesh, orbitOf, sizes } = sites
    const { reciprocal } = this.crystal.lattice!
    const total = orbitOf.length
    const faults: Fault[] = []
    const notes: string[] = []
    const seen = new Int32Array(total).fill(-1)
    let distinct = 0
    const rows = new Uint32Array(sizes.length)
    const weights = new Float64Array(sizes.length)
    const first = new Int32Array(sizes.length).fill(-1)
    let largestMiss = 0
    let fitting = 0
    const all = this.#fractions(list.points)
    for (let i = 0; i < list.count; i++) {
      const f = pointAt(all, i)
      const miss = meshMiss(mesh, f, reciprocal)
      if (miss > tolerance) {
        faults.push({
          kind: 'off',
          line: list.lines[i],
          say: () => `${this.#far(miss)} off the nearest point of the mesh`,
          miss: this.#inverse(miss),
        })
        continue
      }
      fitting++
      largestMiss = Math.max(largestMiss, miss)
      const index = meshIndex(mesh, f)
      const before = seen[index]
      if (before >= 0)
        faults.push({
          kind: 'doubled',
          line: list.lines[i],
          say: () => `the point of line ${list.lines[before]} once more, up to a reciprocal vector`,
        })
      else {
        seen[index] = i
        distinct++
      }
      const orbit = orbitOf[index]
      rows[orbit]++
      if (first[orbit] < 0) first[orbit] = i
      weights[orbit] += list.weights?.[i] ?? 0
    }
    const absent = [...rows.keys()].filter(orbit => rows[orbit] === 0)
    const places = firstPlaces(sites, absent)
    for (const orbit of absent)
      faults.push({
        kind: 'missing',
        say: () =>
          `missing: ${fractions(places.get(orbit)!, this.crystal.dimension)}${sizes[orbit] > 1 ? ` and all of its ${sizes[orbit]} equivalent points` : ''}`,
      })
    const listing =
      distinct === total
        ? 'full'
        : rows.every(n => n === 1)
          ? 'irreducible'
          : absent.length === 0
            ? 'partly reduced'
            : undefined
    if (absent.length === 0) this.#weigh(listing, { rows, weights, sizes, first, total }, faults, notes)
    return this.#explanation('mesh', faults, notes, {
      ...(name !== undefined && { name }),
      fitting,
      wanted: listing === 'full' ? total : sizes.length,
      ...(listing && { listing }),
      largestMiss,
      labels: [],
    })
  }

  /** Each set of equivalent points must weigh what its number of points is of the whole mesh. */
  #weigh(
    listing: Explanation['listing'],
    {
      rows,
      weights,
      sizes,
      first,
      total,
    }: {
      rows: Uint32Array
      weights: Float64Array
      sizes: Uint32Array
      first: Int32Array
      total: number
    },
    faults: Fault[],
    notes: string[],
  ): void {
    const { list } = this
    const sum = weights.reduce((a, b) => a + b, 0)
    if (listing === 'partly reduced')
      notes.push(
        'some points are equivalent under the symmetry of this crystal: the list was reduced by fewer rotations',
      )
    if (!list.weights) {
      if (listing === 'irreducible' && total > sizes.length)
        notes.push('the list has no weights: not every point of an irreducible list counts the same')
      if (listing === 'partly reduced')
        faults.push({
          kind: 'weight',
          say: () => 'neither the full list nor the irreducible one, and without weights',
        })
      return
    }
    if (!(sum > 0)) {
      faults.push({ kind: 'weight', say: () => 'the weights add up to nothing' })
      return
    }
    for (const [orbit, size] of sizes.entries()) {
      const share = weights[orbit] / sum
      const right = size / total
      const allowed = (list.weightDigit * (rows[orbit] + right * list.count)) / sum + WEIGHT_NOISE
      if (Math.abs(share - right) > allowed)
        faults.push({
          kind: 'weight',
          line: list.lines[first[orbit]],
          say: () =>
            `the weight is ${plain(share, 8)} of the whole${rows[orbit] > 1 ? ` (${rows[orbit]} equivalent points)` : ''}; it should be ${plain(right, 8)} (${size} of ${total} points)`,
        })
    }
  }

  #explanation(
    target: Explanation['target'],
    faults: readonly Fault[],
    notes: readonly string[],
    more: Pick<Explanation, 'fitting' | 'wanted' | 'largestMiss' | 'labels' | 'name' | 'listing'>,
  ): Judgement {
    return {
      target,
      frames: this.reading.names,
      matches: faults.length === 0,
      ...more,
      largestMiss: this.#inverse(more.largestMiss),
      tolerance: this.#inverse(this.tolerance),
      faults,
      notes,
    }
  }
}
const WEIGHT_NOISE = 1e-9

/** Where this part of a list stands between the points of the path, its steps are others. */
const RESAMPLED = 0.1

/** Ordinals in a rising list that follow each other, as first and last. */
function runsOf(rising: readonly number[]): [number, number][] {
  const runs: [number, number][] = []
  for (const n of rising) {
    const run = runs.at(-1)
    if (run && run[1] === n - 1) run[1] = n
    else runs.push([n, n])
  }
  return runs
}

function firstPlaces({ mesh, orbitOf }: MeshSites, orbits: readonly number[]): Map<number, Vec3> {
  const wanted = new Set(orbits)
  const places = new Map<number, Vec3>()
  const [, q, r] = mesh.divisions
  for (let index = 0; index < orbitOf.length && places.size < wanted.size; index++) {
    const orbit = orbitOf[index]
    if (!wanted.has(orbit) || places.has(orbit)) continue
    const z = index % r
    const y = ((index - z) / r) % q
    const x = (index - z - y * r) / (q * r)
    places.set(orbit, [x, y, z].map((n, i) => (n + mesh.shift[i]) / mesh.divisions[i]) as unknown as Vec3)
  }
  return places
}

/** `X`, or `point 17 of the path, between Γ and X`. */
function placeOf(index: number, labels: ReadonlyMap<number, string>): string {
  const own = labels.get(index)
  if (own !== undefined) return displayLabel(own)
  let before = ''
  for (const [at, label] of labels) {
    if (at > index)
      return `point ${index + 1} of the path, between ${displayLabel(before)} and ${displayLabel(label)}`
    before = label
  }
  return `point ${index + 1} of the path`
}

/** Fewer points than these are a mesh by chance. */
const FEWEST_OF_MESH = 4

/** A list that is a mesh, but none of the file's: another shift, other divisions. */
function otherMeshInWords(crystal: Crystal, list: KList, readings: readonly Reading[]): string | undefined {
  const { kGroup, dimension } = crystal
  if (!kGroup || list.count < FEWEST_OF_MESH) return undefined
  const own = meshesOf(crystal)
  const inWords = ({ divisions, shift }: Mesh) =>
    `${divisions.slice(0, dimension).join(' × ')} ${shift.some(s => s !== 0) ? `with the shift ${fractions(shift, dimension)}` : 'without a shift'}`
  for (const reading of readings) {
    const mesh = new Judge(crystal, list, reading, PLAIN_MESH).guess()
    // No symmetry reduces a mesh by more than its own order.
    const most = Math.min(MOST_MESH_POINTS, list.count * kGroup.length)
    if (!mesh || meshPoints(mesh) > most || own.some(one => inWords(one.mesh) === inWords(mesh))) continue
    const target: Target = { kind: 'mesh', sites: meshSites(mesh, kGroup) }
    const { listing, faults } = new Judge(crystal, list, reading, target).explain()
    if (!listing || faults.some(({ kind }) => kind !== 'weight')) continue
    const ours =
      own.length === 0 ? '' : `; the file has ${own.map(({ mesh }) => inWords(mesh)).join(' and ')}`
    return `the ${listing} mesh of ${inWords(mesh)}, read as ${reading.names[0]}${ours}`
  }
  return undefined
}
/** Γ alone: what a list is read for before its mesh is known. */
const PLAIN_MESH: Target = {
  kind: 'mesh',
  sites: meshSites({ divisions: [1, 1, 1], shift: [0, 0, 0] }, [IDENTITY]),
}

/** A factor that leaves less than this of the points' size is an explanation. */
const SCALED = 1e-3
/** Where so many points fit, faults say enough. */
const MOSTLY = 0.5

/** What helps where nothing fits: a common factor, else how far the nearest reading is. */
function nearestInWords(
  { angstrom }: Crystal,
  { points }: KList,
  judges: readonly Judge[],
  best: number,
): string | undefined {
  if (judges.length === 0) return 'the file has no path or mesh that a list could be'
  if (best >= MOSTLY) return undefined
  let scaled: { readonly words: string; readonly rest: number } | undefined
  let nearest: { readonly words: string; readonly away: number } | undefined
  for (const { target, reading } of judges) {
    if (target.kind === 'mesh') continue
    const ours = judges[0].reading.axes
    const what = target.kind === 'path' ? 'the path' : "the ends of the path's segments"
    if (target.sequence.length === points.length) {
      const wanted = transformed(target.sequence, ours)
      const read = transformed(points, reading.axes)
      const factor = product(read, wanted) / product(read, read)
      const left = read.map((x, i) => x * factor - wanted[i])
      const rest = Math.sqrt(product(left, left) / product(wanted, wanted))
      if (rest < SCALED && (!scaled || Math.abs(Math.log(Math.abs(factor))) < scaled.rest))
        scaled = {
          words: `every number times ${plain(factor, 6)} gives ${what} (${reading.names[0]}): a length or a unit differs by that factor`,
          rest: Math.abs(Math.log(Math.abs(factor))),
        }
    }
    const away =
      medianDistance(
        transformed(few(points, LOOKED_AT), reading.axes),
        transformed(few(target.sequence, LOOKED_FOR), ours),
      ) / angstrom
    if (!nearest || away < nearest.away)
      nearest = {
        words: `${what}, read as ${reading.names[0]}: half of the points are within ${plain(away, 4)} Å⁻¹ of it`,
        away,
      }
  }
  return scaled?.words ?? nearest?.words
}

function product(p: Float64Array, q: Float64Array): number {
  let sum = 0
  for (let i = 0; i < p.length; i++) sum += p[i] * q[i]
  return sum
}

/** Distances are taken of so many points to so many. */
const LOOKED_AT = 60
const LOOKED_FOR = 600

/** At most so many points, evenly spread. */
function few(points: Float64Array, most: number): Float64Array {
  const step = 3 * Math.ceil(points.length / 3 / most)
  return Float64Array.from({ length: 3 * Math.ceil(points.length / step) }, (_, i) => {
    const axis = i % 3
    return points[((i - axis) / 3) * step + axis]
  })
}

function medianDistance(list: Float64Array, sequence: Float64Array): number {
  const distances = new Float64Array(list.length / 3)
  for (let i = 0; i < distances.length; i++) {
    let least = Number.POSITIVE_INFINITY
    for (let at = 0; at < sequence.length; at += 3) {
      const x = list[3 * i] - sequence[at]
      const y = list[3 * i + 1] - sequence[at + 1]
      const z = list[3 * i + 2] - sequence[at + 2]
      least = Math.min(least, x * x + y * y + z * z)
    }
    distances[i] = Math.sqrt(least)
  }
  return distances.sort()[distances.length >> 1]
}
