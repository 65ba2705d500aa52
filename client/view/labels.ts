/** Where labels stand: beside their point, on no other label, off the lines where there is room, and steady from frame to frame. */

export interface Wanted {
  readonly key: string
  /** The point that it belongs to, in px. */
  readonly at: readonly [number, number]
  readonly width: number
  readonly height: number
  /** Higher ones choose first. */
  readonly rank: number
  /** It may be left out where there is no room. */
  readonly optional: boolean
}

export interface Placed {
  readonly x: number
  readonly y: number
}

type Line = readonly [readonly [number, number], readonly [number, number]]
interface Box {
  readonly left: number
  readonly top: number
  readonly right: number
  readonly bottom: number
}

const DIRECTIONS = Array.from(
  { length: 16 },
  (_, i) => [Math.cos((i * Math.PI) / 8), Math.sin((i * Math.PI) / 8)] as const,
)
/** From the point to the near side of the label, in px. */
const GAPS = [5, 11, 20, 32]
/** Room that a point keeps to itself. */
const POINT = 5
const COSTS = { label: 100, point: 30, line: 4, outside: 200, far: 0.35, inward: 1.5, move: 3 }

export class LabelLayout {
  readonly #last = new Map<string, number>()

  /** Left upper corners; labels without a place are left out. */
  place(
    wanted: readonly Wanted[],
    lines: readonly Line[],
    centre: readonly [number, number],
    [width, height]: readonly [number, number],
  ): Map<string, Placed> {
    const boxes: Box[] = []
    const points = wanted.map(({ at: [x, y] }) => ({
      left: x - POINT,
      right: x + POINT,
      top: y - POINT,
      bottom: y + POINT,
    }))
    const placed = new Map<string, Placed>()
    for (const label of [...wanted].sort((a, b) => b.rank - a.rank)) {
      const best = this.#best(label, boxes, points, lines, centre, [width, height])
      const isCrowded = best.overlaps > 0
      if (isCrowded && (label.optional || best.overlaps > 0.25 * label.width * label.height)) {
        this.#last.delete(label.key)
        continue
      }
      boxes.push(best.box)
      this.#last.set(label.key, best.choice)
      placed.set(label.key, { x: best.box.left, y: best.box.top })
    }
    return placed
  }

  #best(
    { key, at: [x, y], width: w, height: h }: Wanted,
    boxes: readonly Box[],
    points: readonly Box[],
    lines: readonly Line[],
    [cx, cy]: readonly [number, number],
    [width, height]: readonly [number, number],
  ): { box: Box; choice: number; overlaps: number } {
    const away = Math.hypot(x - cx, y - cy)
    const [ox, oy] = away > 4 ? [(x - cx) / away, (y - cy) / away] : [-0.7, 0.7]
    const near = lines.filter(line => distanceTo(line, x, y) < 60)
    const last = this.#last.get(key)
    let best = {
      box: boxes[0],
      choice: -1,
      overlaps: Number.POSITIVE_INFINITY,
      cost: Number.POSITIVE_INFINITY,
    }
    GAPS.forEach((gap, ring) => {
      DIRECTIONS.forEach(([dx, dy], turn) => {
        const choice = ring * DIRECTIONS.length + turn
        // The label's edge, not its middle, keeps the gap.
        const reach =
          gap + Math.min(w / 2 / Math.max(Math.abs(dx), 1e-6), h / 2 / Math.max(Math.abs(dy), 1e-6))
        const [mx, my] = [x + dx * reach, y + dy * reach]
        const box = { left: mx - w / 2, right: mx + w / 2, top: my - h / 2, bottom: my + h / 2 }
        const overlaps = boxes.reduce((sum, other) => sum + common(box, other), 0)
        const isOutside = box.left < 2 || box.top < 2 || box.right > width - 2 || box.bottom > height - 2
        const cost =
          (overlaps > 0 ? COSTS.label + overlaps : 0) +
          COSTS.point * points.filter(point => common(box, point) > 0).length +
          COSTS.line * near.filter(line => crosses(box, line)).length +
          (isOutside ? COSTS.outside : 0) +
          COSTS.far * gap +
          COSTS.inward * (1 - dx * ox - dy * oy) +
          (last !== undefined && last !== choice ? COSTS.move : 0)
        if (cost < best.cost) best = { box, choice, overlaps, cost }
      })
    })
    return best
  }
}

/** The area that two boxes share, with a little air between them. */
const common = (a: Box, b: Box): number =>
  Math.max(0, Math.min(a.right, b.right) - Math.max(a.left, b.left) + 1) *
  Math.max(0, Math.min(a.bottom, b.bottom) - Math.max(a.top, b.top) + 1)

export function distanceTo([[x1, y1], [x2, y2]]: Line, x: number, y: number): number {
  const t = nearestOn(
    [
      [x1, y1],
      [x2, y2],
    ],
    x,
    y,
  )
  return Math.hypot(x1 + t * (x2 - x1) - x, y1 + t * (y2 - y1) - y)
}

/** How much of the line lies before its point nearest to x, y. */
export function nearestOn([[x1, y1], [x2, y2]]: Line, x: number, y: number): number {
  const square = (x2 - x1) ** 2 + (y2 - y1) ** 2
  return square > 0 ? Math.min(1, Math.max(0, ((x - x1) * (x2 - x1) + (y - y1) * (y2 - y1)) / square)) : 0
}

function crosses({ left, right, top, bottom }: Box, [[x1, y1], [x2, y2]]: Line): boolean {
  let [from, to] = [0, 1]
  for (const [start, step, low, high] of [
    [x1, x2 - x1, left, right],
    [y1, y2 - y1, top, bottom],
  ]) {
    if (step === 0) {
      if (start < low || start > high) return false
      continue
    }
    const [a, b] = [(low - start) / step, (high - start) / step]
    from = Math.max(from, Math.min(a, b))
    to = Math.min(to, Math.max(a, b))
  }
  return from <= to
}
