/** Lines, arrows and small marks: drawn on a plain canvas above the solids, so that they are crisp at any size. */
import type { Scene, SceneSegment, SceneSeverity, Triple } from '../../server/src/protocol.ts'
import { along, type Camera, dot } from './camera.ts'
import { normalOf } from './shapes.ts'
import type { Theme } from './theme.ts'

export interface Shown {
  readonly path: boolean
  readonly wedge: boolean
}

/** What the text cursor, the pointer or the keyboard is on. */
export interface Marks {
  /** A point, by label. */
  readonly point?: string
  /** A segment, by its place in the scene. */
  readonly segment?: number
  /** A reciprocal vector, 0 to 2. */
  readonly vector?: number
  /** A place on the path. */
  readonly spot?: Triple
}

type Point2 = readonly [number, number]
interface Wall {
  readonly normal: Triple
  readonly distance: number
}

const DASHES = [5, 4]
const DOTTED = [1.5, 4]

export class Ink {
  readonly walls: readonly Wall[]
  /** For each edge the one or two walls that it belongs to. */
  readonly #sides: readonly (readonly number[])[]

  constructor(readonly scene: Scene) {
    const { zone } = scene
    this.walls = zone.faces.map(face => {
      const corners = face.map(i => zone.vertices[i])
      const normal = normalOf(corners)
      return { normal, distance: dot(normal, corners[0]) }
    })
    this.#sides = zone.edges.map(([i, j]) =>
      zone.faces.flatMap((face, f) => (face.includes(i) && face.includes(j) ? [f] : [])),
    )
  }

  /** Edges on the far side of the solid. */
  hiddenEdges(camera: Camera): boolean[] {
    const facing = this.walls.map(({ normal, distance }) => camera.isFacing(normal, distance))
    return this.#sides.map(sides => sides.length > 0 && !sides.some(side => facing[side]))
  }

  /** The point stands behind the solid or in it, as seen from the eye. */
  isBehind(camera: Camera, k: Triple): boolean {
    if (this.walls.length === 0) return false
    const margin = 1e-6 * this.scene.zone.circumradius
    let [from, to] = [0, Number.POSITIVE_INFINITY]
    for (const { normal, distance } of this.walls) {
      const speed = dot(normal, camera.eye)
      const room = distance - dot(normal, k) - margin
      if (Math.abs(speed) < 1e-9) {
        if (room < 0) return false
      } else if (speed > 0) to = Math.min(to, room / speed)
      else from = Math.max(from, room / speed)
    }
    return to - from > margin
  }

  draw(g: CanvasRenderingContext2D, camera: Camera, theme: Theme, shown: Shown, marks: Marks): void {
    const { scene } = this
    const { vertices, edges } = scene.zone
    const hidden = this.hiddenEdges(camera)
    const strong = theme.isHighContrast ? 1.4 : 1
    g.lineCap = 'round'
    g.lineJoin = 'round'

    const drawEdges = (behind: boolean) => {
      g.beginPath()
      edges.forEach(([i, j], at) => {
        if (hidden[at] === behind) trace(g, camera.project(vertices[i]), camera.project(vertices[j]))
      })
      g.strokeStyle = theme.ink
      g.globalAlpha = behind ? 0.55 : 0.95
      g.lineWidth = (behind ? 0.9 : 1.5) * strong
      g.setLineDash(behind ? DASHES : [])
      g.stroke()
      g.setLineDash([])
      g.globalAlpha = 1
    }

    drawEdges(true)
    if (shown.wedge && scene.wedge) this.#wedge(g, camera, theme, scene.wedge)
    this.#vectors(g, camera, theme, marks)
    this.#folded(g, camera, theme)
    drawEdges(false)
    if (shown.path) this.#path(g, camera, theme, marks)
    if (marks.spot) {
      const [x, y] = camera.project(marks.spot)
      disc(g, x, y, 5.5, theme.paper)
      disc(g, x, y, 4, theme.cursor)
    }
  }

  #wedge(
    g: CanvasRenderingContext2D,
    camera: Camera,
    theme: Theme,
    wedge: NonNullable<Scene['wedge']>,
  ): void {
    g.beginPath()
    for (const [i, j] of wedge.edges)
      trace(g, camera.project(wedge.vertices[i]), camera.project(wedge.vertices[j]))
    g.strokeStyle = theme.wedge
    g.lineWidth = 1.2
    g.stroke()
  }

  /** b₁ b₂ b₃ from Γ: dotted within the solid. */
  #vectors(g: CanvasRenderingContext2D, camera: Camera, theme: Theme, { vector }: Marks): void {
    this.scene.reciprocal.forEach((b, i) => {
      const colour = i === vector ? theme.cursor : theme.ink
      const exit = this.#exit(b)
      const [from, middle, to] = [
        camera.project([0, 0, 0]),
        camera.project(along([0, 0, 0], b, exit)),
        camera.project(b),
      ]
      g.strokeStyle = colour
      g.lineWidth = i === vector ? 2.4 : 1.1
      g.globalAlpha = i === vector ? 1 : 0.8
      g.setLineDash(DOTTED)
      stroke(g, from, middle)
      g.setLineDash([])
      stroke(g, middle, to)
      arrow(g, from, to, 1, 9, colour)
      g.globalAlpha = 1
    })
  }

  /** The part of a vector that lies in the zone. */
  #exit(b: Triple): number {
    if (this.walls.length === 0) return 0
    return this.walls.reduce((least, { normal, distance }) => {
      const reach = dot(normal, b)
      return reach > 0 ? Math.min(least, distance / reach) : least
    }, 1)
  }

  /** From points outside to their equivalents in the zone. */
  #folded(g: CanvasRenderingContext2D, camera: Camera, theme: Theme): void {
    for (const { k, folded, named, severity } of this.scene.points) {
      if (!folded || !named) continue
      g.strokeStyle = severity ? theme[severity] : theme.faint
      g.globalAlpha = 0.8
      g.lineWidth = 1
      g.setLineDash([2, 4])
      stroke(g, camera.project(k), camera.project(folded))
      g.setLineDash([])
      const [x, y] = camera.project(folded)
      g.beginPath()
      g.arc(x, y, 3.5, 0, 2 * Math.PI)
      g.stroke()
      g.globalAlpha = 1
    }
  }

  #path(g: CanvasRenderingContext2D, camera: Camera, theme: Theme, marks: Marks): void {
    const { segments } = this.scene
    const ends = segments.map(({ from, to }) => [camera.project(from.k), camera.project(to.k)] as const)
    // A rim in the colour of the ground keeps lines apart where they cross.
    segments.forEach((_, i) => {
      g.strokeStyle = theme.paper
      g.globalAlpha = 0.55
      g.lineWidth = 5
      stroke(g, ...ends[i])
    })
    g.globalAlpha = 1
    segments.forEach((segment, i) => {
      const isMarked = i === marks.segment
      g.strokeStyle = isMarked ? theme.cursor : colourOf(segment.severity, theme)
      g.lineWidth = isMarked ? 4 : 2.6
      stroke(g, ...ends[i])
    })
    segments.forEach((segment, i) => {
      const colour = i === marks.segment ? theme.cursor : colourOf(segment.severity, theme)
      arrow(g, ...ends[i], 0.58, 10, colour)
    })
  }
}

/** A remark is no alarm: it does not recolour the path. */
const colourOf = (severity: SceneSeverity | undefined, theme: Theme): string =>
  severity === 'error' || severity === 'warning' ? theme[severity] : theme.path

/** Where each unbroken piece begins, for its number; none where there is only one. */
export function pieceStarts(
  segments: readonly SceneSegment[],
): { readonly k: Triple; readonly piece: number }[] {
  const starts = segments.filter(({ piece }, i) => i === 0 || segments[i - 1].piece !== piece)
  return starts.length > 1 ? starts.map(({ from, piece }) => ({ k: from.k, piece: piece + 1 })) : []
}

/** x, y and z in a corner, so that a person knows where up is. */
export function triad(
  g: CanvasRenderingContext2D,
  camera: Camera,
  theme: Theme,
  font: string,
  dimension: number,
): void {
  const [length, x0, y0] = [26, 40, camera.height - 40]
  const axes: readonly Triple[] = [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ]
  g.font = `italic 12px ${font}`
  g.textAlign = 'center'
  g.textBaseline = 'middle'
  axes.slice(0, Math.max(2, dimension)).forEach((axis, i) => {
    const [dx, dy] = [length * dot(axis, camera.right), -length * dot(axis, camera.up)]
    g.strokeStyle = theme.faint
    g.fillStyle = theme.faint
    g.lineWidth = 1
    stroke(g, [x0, y0], [x0 + dx, y0 + dy])
    arrow(g, [x0, y0], [x0 + dx, y0 + dy], 1, 6, theme.faint)
    const reach = Math.hypot(dx, dy)
    const at = reach > 6 ? (reach + 9) / reach : 0
    if (at > 0) g.fillText('xyz'[i], x0 + dx * at, y0 + dy * at)
  })
}

function trace(g: CanvasRenderingContext2D, [x1, y1]: Point2, [x2, y2]: Point2): void {
  g.moveTo(x1, y1)
  g.lineTo(x2, y2)
}

function stroke(g: CanvasRenderingContext2D, from: Point2, to: Point2): void {
  g.beginPath()
  trace(g, from, to)
  g.stroke()
}

function disc(g: CanvasRenderingContext2D, x: number, y: number, radius: number, colour: string): void {
  g.fillStyle = colour
  g.beginPath()
  g.arc(x, y, radius, 0, 2 * Math.PI)
  g.fill()
}

/** Its tip stands at the part t of the way; nothing where the line is seen end-on. */
function arrow(
  g: CanvasRenderingContext2D,
  from: Point2,
  to: Point2,
  t: number,
  length: number,
  colour: string,
): void {
  const [dx, dy] = [to[0] - from[0], to[1] - from[1]]
  const reach = Math.hypot(dx, dy)
  if (reach < 2.2 * length) return
  const [ux, uy] = [dx / reach, dy / reach]
  const [x, y] = [from[0] + t * dx, from[1] + t * dy]
  g.fillStyle = colour
  g.beginPath()
  g.moveTo(x, y)
  g.lineTo(x - length * ux - 0.38 * length * uy, y - length * uy + 0.38 * length * ux)
  g.lineTo(x - 0.72 * length * ux, y - 0.72 * length * uy)
  g.lineTo(x - length * ux + 0.38 * length * uy, y - length * uy - 0.38 * length * ux)
  g.closePath()
  g.fill()
}

/** What must be in sight: the zone, the points, the vectors. */
export const extentOf = ({ zone, points, reciprocal }: Scene): readonly Triple[] => [
  ...zone.vertices,
  ...reciprocal,
  ...points.filter(({ named }) => named).map(({ k }) => k),
]
