import type { BravaisType } from '../../crystal/bravais.ts'
import { star } from '../../crystal/kspace.ts'
import { isSymmetricMesh, type Mesh } from '../../crystal/mesh.ts'
import type { Vec3 } from '../../crystal/vector.ts'
import { latticeGroup } from '../../meaning/placing.ts'
import { fractions } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { checkedMeshes, inWords, listVectors, setDivisions } from './meshes.ts'

interface Facts {
  readonly label: string
  /** What the divisions along each direction must be a multiple of. */
  readonly multiples: readonly number[]
}

/**
 * Where the band edges of many crystals of a type are (common practice): K of graphene and the layered dichalcogenides,
 * L of germanium and the lead salts, R of the cubic lead halides. Each book has these points under these letters.
 */
const EXTREMA: Partial<Record<BravaisType, string>> = { hP: 'K', hp: 'K', cF: 'L', cP: 'R' }

export const meshMissesPoint: Check<Facts> = {
  id: 'mesh-misses-point',
  severity: 'info',
  needs: ['labels', 'frames.atoms'],
  summary:
    'A point where this kind of lattice often has its band edge is not on the mesh: K of a hexagonal lattice, L of a face-centred cubic one, R of a simple cubic one.',
  why: 'A gap or a Fermi level taken from the mesh misses that edge, and converges by jumps, as some divisions hit it and others do not.',
  wrong: 'lattice: {bravais: hp, a: 2.46}\nmesh: {divisions: [10, 10]}\n',
  right: 'lattice: {bravais: hp, a: 2.46}\nmesh: {divisions: [12, 12]}\n',
  *run({ text, crystal }) {
    const { type, kGroup, dimension } = crystal
    const group = latticeGroup(crystal)
    const label = type?.bravais && EXTREMA[type.bravais]
    const point = label && crystal.bookPoints.get(label)
    if (!point || !group || !kGroup || !dimension) return
    const images = star(point.fraction, group)
    const meshes = checkedMeshes(crystal)
    if (meshes.some(({ mesh }) => images.some(k => isOn(mesh, k)))) return
    const multiples = multiplesFor(images)
    for (const item of meshes) {
      const { mesh, at, subject } = item
      // A shifted mesh leaves symmetry points out on purpose, Γ alone is no mesh, another fault comes first.
      if (mesh.shift.some(s => !Number.isInteger(s)) || mesh.divisions.every(n => n === 1)) continue
      if (!isSymmetricMesh(mesh, kGroup)) continue
      const divisions = mesh.divisions.map(
        (n, i) => Math.ceil(n / multiples[i]) * multiples[i],
      ) as unknown as Vec3
      const words = inWords(divisions, dimension)
      yield {
        at,
        message: `${label} = ${fractions(point.fraction, dimension)} is not on this mesh: the divisions along ${requirements(multiples)}. ${words} hits it.`,
        facts: { label, multiples: multiples.slice(0, dimension) },
        subject,
        fixes: [{ title: `Use ${words}`, safe: false, edits: setDivisions(text, item, divisions) }],
      }
    }
  },
}

/** What a component of k on a mesh is a whole number up to. */
const SAME = 1e-6

const isOn = ({ divisions, shift }: Mesh, k: Vec3): boolean =>
  k.every((x, i) => {
    const n = x * divisions[i] - shift[i]
    return Math.abs(n - Math.round(n)) < SAME
  })

/** Denominators of symmetry points divide 12. */
const LARGEST_DENOMINATOR = 12

/** The least divisions of which a mesh through Γ holds all images. */
function multiplesFor(images: readonly Vec3[]): Vec3 {
  const least = (i: number): number => {
    for (let n = 1; n < LARGEST_DENOMINATOR; n++)
      if (images.every(k => Math.abs(k[i] * n - Math.round(k[i] * n)) < SAME)) return n
    return LARGEST_DENOMINATOR
  }
  return [least(0), least(1), least(2)]
}

function requirements(multiples: Vec3): string {
  const needed = multiples.find(n => n > 1)!
  const directions = multiples.flatMap((n, i) => (n > 1 ? [i] : []))
  return `${listVectors(directions)} must be ${needed === 2 ? 'even' : `multiples of ${needed}`}`
}
