/** A mesh by its divisions or by the spacing that gives them. */
import { divisionsForSpacing, isSymmetricMesh } from '../../crystal/mesh.ts'
import { stepsAtSpacing } from '../../crystal/path.ts'
import { INVERSE_SYMBOL } from '../../crystal/units.ts'
import { norm, type Vec3 } from '../../crystal/vector.ts'
import { insertKeys, replaceValue, standsHere } from '../../format/edits.ts'
import type { MeshBlock, TextEdit } from '../../format/model.ts'
import { formatNumber } from '../../format/numbers.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { meshOf } from '../../meaning/sampling.ts'
import type { Offer, Refactor, Spot } from './refactor.ts'
import { isIn, quietly } from './refactor.ts'

export const restateMesh: Refactor = {
  id: 'restate-mesh',
  kind: 'refactor.rewrite',
  offers(spot) {
    const { document, crystal } = spot
    const { meshEntry, meshes } = document
    if (!crystal.lattice || !crystal.kGroup) return []
    if (!meshEntry) return isIn(document.sampling, spot) ? newMesh(spot) : []
    if (!isIn(meshEntry, spot)) return []
    const here = meshes.find(mesh => mesh.name !== undefined && isIn(mesh, spot)) ?? meshes[0]
    if (!here || (meshes.length > 1 && !isIn(here, spot))) return []
    return here.spacing && !here.divisions ? toDivisions(spot, here) : toSpacing(spot, here)
  },
}

function toDivisions({ crystal, text }: Spot, mesh: MeshBlock): Offer[] {
  const divisions = meshOf(crystal, mesh)?.divisions
  if (!divisions) return []
  const written = listOf(divisions, crystal)
  return [
    {
      key: 'divisions',
      title: `State the mesh by its divisions ${written}`,
      change: () => quietly(renamed(text, mesh, 'spacing', 'divisions', written)),
    },
  ]
}

function toSpacing({ crystal, text }: Spot, mesh: MeshBlock): Offer[] {
  const divisions = meshOf(crystal, mesh)?.divisions
  const spacing = divisions && spacingFor(crystal, divisions)
  if (spacing === undefined) return []
  return [
    {
      key: 'spacing',
      title: `State the mesh by the spacing ${spacing} ${INVERSE_SYMBOL[crystal.unit]}`,
      change: () => quietly(renamed(text, mesh, 'divisions', 'spacing', spacing)),
    },
  ]
}

function renamed(
  text: string,
  mesh: MeshBlock,
  from: string,
  to: string,
  value: string,
): TextEdit[] | undefined {
  const entry = mesh.keys.get(from)
  if (!entry || !standsHere(text, entry.at)) return undefined
  const { at, text: written } = replaceValue(text, entry, value)
  return [
    { at: entry.key, text: to },
    { at, text: written },
  ]
}

const listOf = (divisions: Vec3, { lattice }: Crystal): string =>
  `[${divisions.slice(0, lattice!.dimension).join(', ')}]`

/** The shortest decimal of which the divisions follow; undefined where none gives them. */
function spacingFor({ lattice, kGroup }: Crystal, divisions: Vec3): string | undefined {
  const { reciprocal, dimension } = lattice!
  if (!isSymmetricMesh({ divisions, shift: [0, 0, 0] }, kGroup!)) return undefined
  const lengths = reciprocal.slice(0, dimension).map(norm)
  // A spacing of |bᵢ|/nᵢ gives nᵢ, the largest that does so; the finest direction decides.
  const steps = lengths.map((size, i) => size / divisions[i])
  // To raise divisions to a symmetric set costs much more than to see that they are not the ones.
  const isNear = (spacing: number): boolean => {
    const least = lengths.map(size => stepsAtSpacing(size, spacing))
    return least.every((n, i) => n <= divisions[i]) && least.some((n, i) => n === divisions[i])
  }
  for (const coarsest of [Math.max(...steps), Math.min(...steps)])
    for (let digits = 1; digits <= MOST_DIGITS; digits++)
      for (const spacing of roundedNear(coarsest, digits)) {
        if (!isNear(spacing)) continue
        const found = divisionsForSpacing(reciprocal, dimension, spacing, kGroup!)
        if (found.every((n, i) => n === divisions[i])) return formatNumber(spacing, MOST_DIGITS)
      }
  return undefined
}
const MOST_DIGITS = 6

/** A decimal of so many digits below a length, and the one above it. */
function roundedNear(x: number, digits: number): number[] {
  const unit = 10 ** -digits
  return [Math.floor(x / unit) * unit, Math.ceil(x / unit) * unit].filter(spacing => spacing > 0)
}

/** A file without a mesh gets one of the usual fineness, in Å⁻¹ (common practice for insulators). */
const USUAL_SPACING = 0.2

function newMesh({ crystal, document, text }: Spot): Offer[] {
  const { lattice, kGroup, angstrom } = crystal
  const { reciprocal, dimension } = lattice!
  const divisions = divisionsForSpacing(reciprocal, dimension, USUAL_SPACING * angstrom, kGroup!)
  const written = listOf(divisions, crystal)
  return [
    {
      key: 'new',
      title: `Add a mesh of ${written}, steps of up to ${USUAL_SPACING} Å⁻¹`,
      change: () => quietly(insertKeys(text, document, [['mesh', `{divisions: ${written}}`]])),
    },
  ]
}
