/**
 * What a form knows: the lattice report, with everything that it leaves out filled in as null, and what programs ask for
 * beyond it. Plain data; its shape is that of `schema.ts`, which the reference of variables is made from.
 */
import type { DocumentAnalysis } from '../../analysis.ts'
import { elementOf } from '../../crystal/elements.ts'
import { kToConventional, atomToConventional, type Lattice } from '../../crystal/lattice.ts'
import { LARGEST_LISTING, type Mesh, meshPoints } from '../../crystal/mesh.ts'
import { BOHR, HBAR2_OVER_2M } from '../../crystal/units.ts'
import { combine, inverse, type Mat3, scale, tidy, type Vec3 } from '../../crystal/vector.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { meshJson } from '../mesh-points.ts'
import { type KnownSegment, knownSegments } from '../path-points.ts'
import { pathJson } from '../path-table.ts'
import { type MeshReport, type Report, reportOf } from '../report.ts'
import { meshesOf } from '../../meaning/sampling.ts'
import { complete } from './schema.ts'

export type FormData = Readonly<Record<string, unknown>>

export interface FormKnowledge {
  readonly data: FormData
  /** Why a top-level value is null, by its name. */
  readonly reasons: Readonly<Record<string, string>>
}

export interface FormQuestion {
  /** The lattice file as it was asked for. */
  readonly file: string
  readonly analysis: DocumentAnalysis
  /** Those of this document. */
  readonly findings: Parameters<typeof reportOf>[2]
  /** The form and its partials: lists that none of them names are not made. */
  readonly texts: readonly string[]
  /** The mesh that `mesh` means, where the file names several. */
  readonly mesh?: string
  /** Of the program. */
  readonly version: string
  /** YYYY-MM-DD. */
  readonly date: string
}

/** More k-points than this in one list are more than a job reads, and than a form is filled with in seconds. */
export const MOST_LISTED = 250_000

/**
 * @returns why there is no data: the sentence names what the form asked for too much of.
 */
export function formData(question: FormQuestion): FormKnowledge | { readonly refused: string } {
  const { file, analysis, findings, texts, version, date } = question
  const { document, crystal } = analysis
  const report = reportOf(file, analysis, findings)
  const asks = (name: string): boolean => texts.some(text => new RegExp(`\\b${name}\\b`).test(text))
  const segments = report.path ? knownSegments(crystal) : []
  const sampled = segments.reduce((sum, { steps }) => sum + steps + 1, 0)
  if (asks('sampled') && sampled > MOST_LISTED)
    return refused('sampled', `the path has ${sampled.toLocaleString('en')} points`)
  const meshes = meshList(crystal, report, asks)
  if ('refused' in meshes) return meshes
  const data = complete({
    ...report,
    stem: file
      .split(/[/\\]/)
      .at(-1)!
      .replace(/\.lattice\.ya?ml$/, ''),
    version,
    date,
    constants: {
      pi: Math.PI,
      bohr: BOHR,
      // E_h = ħ²/(mₑ a₀²).
      hartree: (2 * HBAR2_OVER_2M) / BOHR ** 2,
      hbar2Over2m: HBAR2_OVER_2M,
    },
    ...latticePart(crystal, report),
    ...(report.path && { path: pathPart(crystal, report.path, segments, asks('sampled')) }),
    mesh: undefined,
    meshes,
  })
  const named = meshes.findIndex(({ name }) => name !== undefined && name === question.mesh)
  const mesh = (data.meshes as unknown[])[named < 0 && meshes.length === 1 ? 0 : named] ?? null
  return { data: { ...data, mesh }, reasons: reasonsOf(document, crystal, report, meshes.length) }
}

const refused = (name: string, why: string): { readonly refused: string } => ({
  refused: `the form asks for \`${name}\`, and ${why}: over ${MOST_LISTED.toLocaleString('en')} are not listed`,
})

function latticePart(crystal: Crystal, report: Report): object {
  const { lattice } = crystal
  if (!lattice || !report.lattice || !report.reciprocal) return {}
  const cell = cellOf(crystal, lattice)
  return {
    lattice: { ...report.lattice, height: heightOf(crystal), cell },
    reciprocal: {
      ...report.reciprocal,
      conventional: lattice.conventionalReciprocal.slice(0, lattice.dimension),
    },
    points: report.points?.map(point => ({
      ...point,
      conventional: kToConventional(inSpace(point.fraction), lattice).slice(0, lattice.dimension),
    })),
    ...(crystal.document.atoms && atomsPart(crystal, lattice, cell)),
  }
}

const heightOf = ({ document }: Crystal): number | undefined => document.lattice?.height?.value

/** The three vectors of the cell that a program computes in: a plane lattice has one where its height is stated. */
function cellOf(crystal: Crystal, { dimension, primitive }: Lattice): Mat3 | undefined {
  const height = heightOf(crystal)
  if (dimension === 3) return primitive
  if (dimension === 2 && height !== undefined)
    return [primitive[0], primitive[1], scale(primitive[2], height)]
  return undefined
}

function atomsPart(crystal: Crystal, lattice: Lattice, cell: Mat3 | undefined): object {
  const toCell = cell && inverse(cell)
  const atoms = crystal.atoms.map(({ element, entry, kind, fraction, cartesian }) => ({
    element,
    elementName: elementOf(element)?.name,
    atomicNumber: elementOf(element)?.number,
    name: entry.name?.value,
    species: kind + 1,
    fraction: tidy(fraction),
    conventional: atomToConventional(fraction, lattice),
    cartesian: tidy(cartesian),
    inCell: toCell && tidy(combine(cartesian, toCell)),
  }))
  const alike = (key: 'species' | 'element') =>
    [...new Set(atoms.map(atom => atom[key]))].map(value => atoms.filter(atom => atom[key] === value))
  return {
    atoms,
    species: alike('species').map(([{ element, elementName, atomicNumber, name, species }, ...others]) => ({
      number: species,
      element,
      elementName,
      atomicNumber,
      name,
      count: others.length + 1,
    })),
    elements: alike('element').map(([{ element, elementName, atomicNumber }, ...others]) => ({
      element,
      elementName,
      atomicNumber,
      count: others.length + 1,
    })),
  }
}

const inSpace = (v: readonly number[]): Vec3 => [v[0] ?? 0, v[1] ?? 0, v[2] ?? 0]

function pathPart(
  crystal: Crystal,
  path: NonNullable<Report['path']>,
  segments: readonly KnownSegment[],
  sampled: boolean,
): object {
  const dimension = crystal.dimension!
  return {
    ...path,
    segments: path.segments.map((segment, i) => {
      const { piece, start, steps, from, to } = segments[i]
      return {
        ...segment,
        piece: piece + 1,
        start,
        steps,
        fromFraction: tidy(from.fraction).slice(0, dimension),
        toFraction: tidy(to.fraction).slice(0, dimension),
        fromCartesian: tidy(from.cartesian),
        toCartesian: tidy(to.cartesian),
      }
    }),
    ...(sampled && { sampled: pathJson(segments, dimension) }),
  }
}

type MeshPart = MeshReport & { readonly name?: string }

function meshList(
  crystal: Crystal,
  { mesh: report }: Report,
  asks: (name: string) => boolean,
): MeshPart[] | { readonly refused: string } {
  const parts: MeshPart[] = []
  for (const { name, mesh } of report ? meshesOf(crystal) : []) {
    const own = (name === undefined ? report : (report as Record<string, MeshReport>)[name]) as MeshReport
    const lists: Record<string, unknown> = {}
    for (const [list, size] of [
      ['irreduciblePoints', own.irreducible],
      ['allPoints', own.points],
    ] as const) {
      if (!asks(list)) continue
      if (size === undefined) continue
      if (size > MOST_LISTED || own.points > LARGEST_LISTING)
        return refused(list, `the mesh has ${own.points.toLocaleString('en')} points`)
      lists[list] = listed(crystal, mesh, list === 'allPoints')
    }
    parts.push({ ...own, name, ...lists })
  }
  return parts
}

function listed(crystal: Crystal, mesh: Mesh, full: boolean): unknown {
  const total = meshPoints(mesh)
  return meshJson(crystal, mesh, full)?.points.map(({ fraction, weight }) => ({
    fraction,
    cartesian: tidy(combine(inSpace(fraction), crystal.lattice!.reciprocal)),
    weight,
    multiplicity: Math.round(weight * total),
  }))
}

function reasonsOf(
  document: DocumentAnalysis['document'],
  crystal: Crystal,
  report: Report,
  meshes: number,
): Readonly<Record<string, string>> {
  const { symmetryOutcome: outcome } = crystal
  return {
    ...(document.title ? {} : { title: 'the file has no `title`' }),
    ...(document.atoms ? {} : { atoms: NO_ATOMS, species: NO_ATOMS, elements: NO_ATOMS }),
    ...(report.book ? {} : { book: 'no label book is in force' }),
    ...(report.path ? {} : { path: 'the file has no path' }),
    ...(report.symmetry
      ? {}
      : { symmetry: outcome.state === 'failed' ? outcome.reason : 'it was not found' }),
    ...(meshes === 0 ? { mesh: 'the file has no mesh' } : {}),
    ...(meshes > 1 ? { mesh: 'the file names several: go through `meshes`, or name one (--mesh)' } : {}),
  }
}
const NO_ATOMS = 'the file has no atoms'
