/** The facts of a k-point and of a path segment, as pairs of name and value: hovers, the zone view and figures share them. */
import { littleCoGroup } from '../crystal/kspace.ts'
import { norm, scale, subtract } from '../crystal/vector.ts'
import { fold, placeInZone, zoneNumber } from '../crystal/zone.ts'
import type { Crystal, PlacedPoint } from './crystal.ts'
import { lineOfSegment, nearestBookPoint } from './placing.ts'
import { cartesian, count, fractions, inverseLength } from './wording.ts'

export type Fact = readonly [name: string, value: string]

const PLACES = { inside: 'inside the first zone', boundary: 'on the boundary of the first zone' }

/** Empty where the lattice is not known. */
export function pointFacts(crystal: Crystal, point: PlacedPoint): Fact[] {
  const { zone, lattice, unit, kGroup } = crystal
  if (!zone || !lattice) return []
  const { dimension } = lattice
  const { place, excess } = placeInZone(zone, point.cartesian)
  const facts: Fact[] = [
    ['fraction', fractions(point.fraction, dimension)],
    ['Cartesian', cartesian(point.cartesian, unit)],
    ['length', inverseLength(norm(point.cartesian), unit)],
  ]
  if (place === 'outside') {
    const folded = fold(zone, point.fraction)
    facts.push(
      ['place', `outside by ${inverseLength(excess, unit)}, ${inZone(zoneNumber(zone, point.cartesian))}`],
      ['folded', `${fractions(folded.fraction, dimension)}, length ${inverseLength(folded.length, unit)}`],
    )
  } else facts.push(['place', PLACES[place]])
  if (kGroup) {
    const order = littleCoGroup(point.fraction, kGroup).length
    facts.push(['little co-group', `${count(order, 'rotation')}; star of ${kGroup.length / order}`])
  }
  const nearest = point.origin === 'file' ? nearestBookPoint(crystal, point.cartesian) : undefined
  if (nearest) {
    const away = nearest.distance < zone.tolerance ? '' : `, ${inverseLength(nearest.distance, unit)} away`
    facts.push(['nearest book point', `${nearest.label}${away}`])
  }
  return facts
}

function inZone(zone: number | undefined): string {
  if (zone === undefined) return 'beyond the 100,000th zone'
  const tens = zone % 100
  const suffix = tens > 10 && tens < 20 ? 'th' : (['th', 'st', 'nd', 'rd'][zone % 10] ?? 'th')
  return `in the ${zone}${suffix} zone`
}

export function segmentFacts(crystal: Crystal, from: PlacedPoint, to: PlacedPoint, steps?: number): Fact[] {
  const { unit } = crystal
  const step = subtract(to.cartesian, from.cartesian)
  const length = norm(step)
  const facts: Fact[] = [['length', inverseLength(length, unit)]]
  if (length === 0) return facts
  facts.push(['direction', cartesian(scale(step, 1 / length))])
  if (steps) facts.push(['steps', `${steps}, ${inverseLength(length / steps, unit)} each`])
  const line = lineOfSegment(crystal, from.cartesian, to.cartesian)
  if (line) facts.push(['line', line])
  return facts
}
