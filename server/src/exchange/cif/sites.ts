/** From independent sites to the basis: orbits under the operations, one atom at each lattice point, alternatives settled. */
import type { Operation } from '../../crystal/symmetry-library.ts'
import { nearestImage, PositionGrid } from '../../crystal/translations.ts'
import { add, apply, combine, norm, type Mat3, scale, subtract, type Vec3 } from '../../crystal/vector.ts'
import { isUnit, wrap } from './operations.ts'
import { type CifSite, listed, type Remark } from './read.ts'

export interface BasisAtom {
  readonly site: CifSite
  /** Fractions of the CIF's cell, in [0, 1). */
  readonly position: Vec3
}

export interface Basis {
  readonly atoms: readonly BasisAtom[]
  readonly remarks: readonly Remark[]
  /** By element: atoms in the whole cell, weighted with their occupancies, all alternatives counted. */
  readonly contents: ReadonlyMap<string, number>
}

/**
 * Images of an atom nearer than this, in Å, are one on a special position that was rounded or refined; a displacement
 * that is meant is larger.
 */
const SPECIAL = 0.05
/** Coarser coordinates (`0.33`) miss a special position by more: then their digits decide, up to this, in Å. */
const MOST_SPECIAL = 0.15
/** Digits that are too few to be a rounding: `0.3` is meant. */
const FEWEST_DECIMALS = 2
/** Two partly occupied sites nearer than this, in Å, are alternatives: no bond is as short (H₂: 0.74 Å). */
const ALTERNATIVES = 0.7
/** More atoms than any file of ours should list. */
const MOST_ATOMS = 200_000
/** Occupancies are refined to some hundredths. */
const FULL = 0.995

export function basisOf(
  sites: readonly CifSite[],
  operations: readonly Operation[],
  rows: Mat3,
): Basis | undefined {
  const translations = operations.filter(({ rotation }) => isUnit(rotation)).map(o => o.translation)
  // One operation for each rotation: the others differ by a translation of the lattice.
  const turns = [...new Map([...operations].reverse().map(o => [o.rotation.join(), o])).values()].reverse()
  const remarks: Remark[] = []
  const atoms: BasisAtom[] = []
  const kinds: number[] = []
  const moved: string[] = []
  const contents = new Map<string, number>()
  for (const [kind, site] of sites.entries()) {
    const special = ontoSpecial(site, operations, rows)
    if (special.by > MENTIONED) moved.push(`${site.label} by ${special.by.toFixed(3)} Å`)
    const orbit = orbitOf(special.position, turns, translations)
    for (const position of orbit) {
      atoms.push({ site, position })
      kinds.push(kind)
    }
    if (atoms.length > MOST_ATOMS) return undefined
    contents.set(
      site.element,
      (contents.get(site.element) ?? 0) + orbit.length * translations.length * site.occupancy,
    )
  }
  if (moved.length > 0)
    remarks.push({
      level: 'note',
      message: `put exactly on the special position that they are next to: ${listed(moved)}`,
    })
  const left = settle(sites, atoms, kinds, translations, rows, remarks)
  return { atoms: atoms.filter((_, i) => !left.has(kinds[i])), remarks, contents }
}

/** A shift onto a special position that is worth a word, in Å: more than a rounding to four digits makes. */
const MENTIONED = 0.005

/**
 * The place of a site, exactly on the special position that it is on or next to: the mean of the images under those
 * operations that hardly move it.
 */
function ontoSpecial(
  { position, decimals }: CifSite,
  operations: readonly Operation[],
  rows: Mat3,
): { position: Vec3; by: number } {
  const spread = decimals.reduce((sum, d, i) => sum + (d < FEWEST_DECIMALS ? 0 : 10 ** -d * norm(rows[i])), 0)
  const images = operations.map(operation => {
    const image = add(apply(operation.rotation, position), operation.translation)
    const away = nearestImage(subtract(image, position), 3)
    return { operation, image: add(position, away), away: norm(combine(away, rows)) }
  })
  for (let reach = Math.min(MOST_SPECIAL, Math.max(SPECIAL, 2 * spread)); reach > 1e-6; reach /= 2) {
    const near = images.filter(({ away }) => away <= reach)
    const mean = scale(
      near.reduce((sum, { image }) => add(sum, image), [0, 0, 0] as Vec3),
      1 / near.length,
    )
    const isFixed = near.every(({ operation }) => {
      const image = add(apply(operation.rotation, mean), operation.translation)
      return nearestImage(subtract(image, mean), 3).every(x => Math.abs(x) < EXACT)
    })
    if (isFixed) return { position: mean, by: norm(combine(subtract(mean, position), rows)) }
  }
  return { position, by: 0 }
}
/** Fractions that arithmetic makes of equal ones differ by less. */
const EXACT = 1e-9

/** One image at each lattice point, the site itself first. */
function orbitOf(position: Vec3, turns: readonly Operation[], translations: readonly Vec3[]): Vec3[] {
  const orbit: Vec3[] = []
  for (const { rotation, translation } of turns) {
    const image = wrap(add(apply(rotation, position), translation))
    const isKnown = orbit.some(known =>
      translations.some(t =>
        nearestImage(subtract(subtract(image, known), t), 3).every(x => Math.abs(x) < SAME_PLACE),
      ),
    )
    if (!isKnown) orbit.push(image)
  }
  return orbit
}
const SAME_PLACE = 1e-6

/** Sites at one place, alternatives, vacancies: which sites to leave out, and what to say. */
function settle(
  sites: readonly CifSite[],
  atoms: readonly BasisAtom[],
  kinds: readonly number[],
  translations: readonly Vec3[],
  rows: Mat3,
  remarks: Remark[],
): Set<number> {
  const left = new Set<number>()
  if (sites.length === 0) return left
  const home = sites.map((_, i) => i)
  const rootOf = (i: number): number => {
    while (home[i] !== i) i = home[i] = home[home[i]]
    return i
  }
  const split = new Map<number, number>()
  // Each site meets the nearest of the others; those that fell together with it are out of the way in the next round.
  for (let joined = true; joined; ) {
    joined = false
    const living = [...atoms.keys()].filter(i => rootOf(kinds[i]) === kinds[i])
    const positions = living.flatMap(i => translations.map(t => wrap(add(atoms[i].position, t))))
    const species = living.flatMap(i => translations.map(() => kinds[i]))
    const grid = new PositionGrid({ dimension: 3, basis: rows, positions, species }, ALTERNATIVES)
    for (let at = 0; at < positions.length; at += translations.length) {
      const kind = species[at]
      const found = grid.nearest(positions[at], undefined, at)
      if (found < 0) continue
      const other = species[found]
      const away = norm(combine(nearestImage(subtract(positions[found], positions[at]), 3), rows))
      if (other === kind) split.set(kind, Math.min(away, split.get(kind) ?? away))
      else if (rootOf(kind) === kind && rootOf(other) === other)
        if (away < SPECIAL || (isPartial(sites[kind]) && isPartial(sites[other]))) {
          // The one that is there most stays, of equal ones the first.
          const [major, minor] =
            sites[kind].occupancy > sites[other].occupancy ||
            (sites[kind].occupancy === sites[other].occupancy && kind < other)
              ? [kind, other]
              : [other, kind]
          home[minor] = major
          joined = true
        }
    }
  }
  const classes = new Map<number, number[]>()
  for (const i of sites.keys()) classes.set(rootOf(i), [...(classes.get(rootOf(i)) ?? []), i])
  const twice: string[] = []
  const partial: CifSite[] = []
  for (const members of classes.values()) {
    const [major, ...others] = [...members].sort((p, q) => sites[q].occupancy - sites[p].occupancy || p - q)
    const site = sites[major]
    for (const other of others) left.add(other)
    if (
      others.length > 0 &&
      [major, ...others].every(i => !isPartial(sites[i]) && sites[i].element === site.element)
    )
      twice.push(...others.map(i => sites[i].label))
    else if (others.length > 0)
      remarks.push({
        level: 'loss',
        message: `mixed site: ${[major, ...others].map(i => share(sites[i])).join(', ')}; only ${site.element} (${site.label}) was kept, fully occupied`,
        place: site.place,
      })
    else if (site.occupancy <= 0) {
      left.add(major)
      remarks.push({
        level: 'loss',
        message: `${site.label} has occupancy ${site.occupancy} and was left out`,
        place: site.place,
      })
    } else if (isPartial(site)) partial.push(site)
    const away = split.get(major)
    if (away !== undefined)
      remarks.push({
        level: 'loss',
        message: `images of ${site.label} lie ${away.toFixed(2)} Å apart: alternatives of a split site, of which all were kept`,
        place: site.place,
      })
  }
  if (partial.length > 0)
    remarks.push({
      level: 'loss',
      message: `partly occupied, kept as if fully: ${listed(partial.map(share))}`,
      place: partial[0].place,
    })
  if (twice.length > 0)
    remarks.push({
      level: 'note',
      message: `listed again though the symmetry makes them of others: ${listed(twice)}`,
    })
  return left
}

const isPartial = ({ occupancy }: CifSite): boolean => occupancy < FULL

const share = ({ label, element, occupancy }: CifSite): string =>
  `${element} ${Number(occupancy.toFixed(3))} (${label})`
