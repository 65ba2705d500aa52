/** Points and atoms by other axes. */
import type { AtomFrame, PointFrame } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import { covers } from '../../analysis.ts'
import { atomsInFrame, pointReadIn, pointsInFrame } from '../../meaning/rewrite-frames.ts'
import type { Offer, Refactor, Spot } from './refactor.ts'
import { isIn, quietly } from './refactor.ts'

const IN_WORDS: Record<PointFrame, string> = {
  primitive: 'fractions of the primitive cell',
  conventional: 'fractions of the conventional cell',
  cartesian: 'Cartesian coordinates',
  '2pi/a': 'units of 2π/a',
}
const POINT_FRAMES: readonly PointFrame[] = ['primitive', 'conventional', 'cartesian', '2pi/a']
const ATOM_FRAMES: readonly AtomFrame[] = ['conventional', 'primitive', 'cartesian']

/** Frames that differ from the one in force: without a centring the two cells are one. */
function others<F extends PointFrame>({ crystal }: Spot, frames: readonly F[], now: F): F[] {
  const isOneCell = crystal.lattice?.centring === 'P'
  const cellOf = (frame: F) => (isOneCell && frame === 'conventional' ? 'primitive' : frame)
  return frames.filter(frame => cellOf(frame) !== cellOf(now) && (frame !== 'conventional' || !isOneCell))
}

export const restatePoints: Refactor = {
  id: 'restate-points',
  kind: 'refactor.rewrite',
  offers(spot) {
    const { crystal, document, text, offset } = spot
    const { points, framesEntry, frames } = document
    if (!points || !crystal.lattice || !crystal.pointAxes) return []
    const isHere = isIn(points, spot) || isIn(framesEntry?.points, spot)
    if (!isHere) return []
    const usable = others(spot, POINT_FRAMES, frames.points).filter(frame => crystal.axesOfFrame(frame))
    const all = usable.map(
      (frame): Offer => ({
        key: frame,
        title: `State the points in ${IN_WORDS[frame]}`,
        change: () => quietly(pointsInFrame(crystal, text, frame)),
      }),
    )
    const entry = points.items.find(({ key, at }) => covers([key[0], at[1]], offset))
    if (!entry?.coordinates) return all
    const name = displayLabel(entry.label)
    return [
      ...all,
      ...usable.map(
        (frame): Offer => ({
          key: `one/${frame}`,
          title: `Read the numbers of ${name} as ${IN_WORDS[frame]}`,
          change: () => {
            const edits = pointReadIn(crystal, text, entry, frame)
            if (!edits || edits.length === 0) return undefined
            return {
              edits,
              confirm: `${name} becomes another k-point: the one that its numbers mean in ${IN_WORDS[frame]}`,
            }
          },
        }),
      ),
    ]
  },
}

export const restateAtoms: Refactor = {
  id: 'restate-atoms',
  kind: 'refactor.rewrite',
  offers(spot) {
    const { crystal, document, text } = spot
    const { atoms, framesEntry, frames } = document
    if (!atoms || !crystal.lattice || !crystal.atomsComplete) return []
    if (!isIn(atoms, spot) && !isIn(framesEntry?.atoms, spot)) return []
    return others(spot, ATOM_FRAMES, frames.atoms).map(frame => ({
      key: frame,
      title: `State the atoms in ${IN_WORDS[frame]}`,
      change: () => quietly(atomsInFrame(crystal, text, frame)),
    }))
  },
}
