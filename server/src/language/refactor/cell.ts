/** The lattice stated otherwise: by vectors, by type, in its primitive or its standard conventional cell. */
import { BRAVAIS, type BravaisType, CENTRING_TABLES, completeCell } from '../../crystal/bravais.ts'
import { cellParameters, type Lattice } from '../../crystal/lattice.ts'
import { IDENTITY, type Mat3, multiply } from '../../crystal/vector.ts'
import { PARAMETER_NAMES } from '../../format/model.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { type Cell, restate } from '../../meaning/rewrite.ts'
import type { Offer, Refactor, Spot } from './refactor.ts'
import { isIn } from './refactor.ts'
import { asChange } from './supercell.ts'

export const restateCell: Refactor = {
  id: 'restate-cell',
  kind: 'refactor.rewrite',
  offers(spot) {
    const { crystal, document } = spot
    const { lattice } = crystal
    if (!isIn(document.lattice, spot) || !lattice || !document.lattice) return []
    const isByVectors = document.lattice.vectors !== undefined
    const offers: Offer[] = []
    if (!isByVectors)
      offers.push(
        offer(spot, 'vectors', 'State the lattice by vectors', {
          change: IDENTITY,
          centring: lattice.centring,
        }),
      )
    if (lattice.centring !== 'P')
      offers.push(
        offer(spot, 'primitive', 'State the primitive vectors', {
          change: lattice.primitiveFromConventional,
          centring: 'P',
        }),
      )
    return [...offers, ...standardOffers(spot, isByVectors)]
  },
}

/** The conventional cell: from vectors by the file's own axes where they make one, from a type in the standard setting. */
function standardOffers(spot: Spot, isByVectors: boolean): Offer[] {
  const { crystal } = spot
  const { type, lattice, document } = crystal
  if (!type?.bravais || !lattice) return []
  const { bravais } = type
  const { centring } = BRAVAIS[bravais]
  const standard = multiply(type.conventionalFromPrimitive, lattice.primitiveFromConventional)
  const isAsStated = (change: Mat3) => centring === lattice.centring && isIdentity(change)
  if (!isByVectors) {
    if (isAsStated(standard) && document.lattice!.bravais?.value === bravais) return []
    const cell = { change: standard, centring, bravais }
    return [offer(spot, 'type', `State the standard cell of the lattice (${bravais})`, cell)]
  }
  const change = ownAxes(lattice, bravais) ?? standard
  const conventional = `State the conventional vectors with their centring (${bravais})`
  const byType = `State the lattice by its type and parameters (${bravais})`
  return [
    ...(isAsStated(change) ? [] : [offer(spot, 'conventional', conventional, { change, centring })]),
    offer(spot, 'type', byType, { change, centring, bravais }),
  ]
}

/** The file's axes, or those of which its primitive vectors are the usual ones, where they make a cell of this type. */
function ownAxes(lattice: Lattice, bravais: BravaisType): Mat3 | undefined {
  const { centring } = BRAVAIS[bravais]
  const axes =
    lattice.centring === centring
      ? IDENTITY
      : multiply(CENTRING_TABLES[centring].conventional, lattice.primitiveFromConventional)
  const isOwn = lattice.centring === centring || lattice.centring === 'P'
  return isOwn && lattice.handedness === 1 && isOfType(lattice, axes, bravais) ? axes : undefined
}

function offer({ crystal, text }: Spot, key: string, title: string, cell: Cell): Offer {
  const told = idealises(crystal, cell)
    ? 'The lattice is made exactly as symmetric as it is within the tolerance'
    : 'The numbers refer to other axes'
  return { key, title, change: () => asChange(restate(crystal, text, cell), told) }
}

/** Does the type tie what the numbers leave apart by more than rounding? */
const idealises = ({ lattice }: Crystal, { change, bravais }: Cell): boolean =>
  bravais !== undefined && lattice !== undefined && !isOfType(lattice, change, bravais)

/** Are the lengths and angles those of the type, up to rounding? */
function isOfType({ conventional }: Lattice, change: Mat3, bravais: BravaisType): boolean {
  const { free, dimension } = BRAVAIS[bravais]
  const cell = cellParameters(multiply(change, conventional))
  const completed = completeCell(bravais, Object.fromEntries(free[0].map(name => [name, cell[name]])))
  const counted = dimension === 3 ? PARAMETER_NAMES : (['a', 'b', 'gamma'] as const)
  return (
    'cell' in completed &&
    counted.every(name => Math.abs(completed.cell[name] - cell[name]) <= ROUNDING * cell[name])
  )
}
const ROUNDING = 1e-9

const isIdentity = (m: Mat3): boolean =>
  m.every((row, i) => row.every((x, j) => Math.abs(x - IDENTITY[i][j]) < ROUNDING))
