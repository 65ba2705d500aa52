/**
 * The zone as a vector figure, ready for a paper: black on white, hidden edges dashed, labels as text, the path in one
 * colour. Parallel projection; lengths in the figure are true to scale along the two directions across the view.
 */
import type { Scene, SceneName, SceneSegment, Triple } from '../protocol.ts'

export interface FigureOptions {
  /** Where the eye stands: degrees from z towards the plane, and degrees about z from x; else from the scene's own place. */
  readonly view?: readonly [theta: number, phi: number]
  /** In the figure's own units (px at 96 dpi). */
  readonly size?: number
  readonly colours?: Partial<FigureColours>
}

export interface FigureColours {
  readonly background: string
  readonly ink: string
  readonly path: string
  readonly face: string
}

const BLACK_ON_WHITE: FigureColours = {
  background: '#ffffff',
  ink: '#000000',
  path: '#0a58a6',
  face: '#000000',
}

const SIZE = 480
const MARGIN = 44
const FONT = 15

type Point2 = readonly [x: number, y: number]
interface Box {
  readonly x: number
  readonly y: number
  readonly w: number
  readonly h: number
}

export function zoneFigure(scene: Scene, { view, size = SIZE, colours }: FigureOptions = {}): string {
  const paint = { ...BLACK_ON_WHITE, ...colours }
  const camera = new Camera(scene, view ?? scene.home, size)
  const shown = scene.points.filter(({ named }) => named)
  const points = shown.length > 0 ? shown : scene.points
  const body = [
    ...faces(scene, camera, paint),
    ...edges(scene, camera, paint, false),
    ...reciprocal(scene, camera, paint),
    ...edges(scene, camera, paint, true),
    ...scene.segments.flatMap(segment => pathSegment(segment, camera, paint)),
    ...outsideLinks(scene, camera, paint),
    ...points.map(({ k, label }) => {
      const [x, y] = camera.project(k)
      return `<circle class="point" data-label="${escapeXml(label)}" cx="${n(x)}" cy="${n(y)}" r="2.6" fill="${paint.ink}"/>`
    }),
    ...labels(scene, points, camera, paint),
  ]
  const { width, height } = camera
  const title = escapeXml(scene.title || `First zone: ${scene.zone.solid}`)
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${n(width)}" height="${n(height)}" viewBox="0 0 ${n(width)} ${n(height)}" role="img" font-family="Georgia, 'Times New Roman', serif" font-size="${FONT}">`,
    `<title>${title}</title>`,
    `<desc>${escapeXml(scene.words.join(' '))}</desc>`,
    `<rect width="100%" height="100%" fill="${paint.background}"/>`,
    ...body,
    '</svg>',
    '',
  ].join('\n')
}

const n = (x: number): string => String(Math.round(x * 1000) / 1000 + 0)

export const escapeXml = (text: string): string =>
  text.replace(/[&<>"]/g, c => `&#${c.charCodeAt(0)};`).replace(/[^\P{Cc}\t\n\r]/gu, '\ufffd')

const dot = (u: Triple, v: Triple): number => u[0] * v[0] + u[1] * v[1] + u[2] * v[2]
const along = (u: Triple, v: Triple, t: number): Triple => [
  u[0] + t * (v[0] - u[0]),
  u[1] + t * (v[1] - u[1]),
  u[2] + t * (v[2] - u[2]),
]

/** Seen from infinity: the eye's direction, and the two directions across it. */
class Camera {
  readonly eye: Triple
  readonly width: number
  readonly height: number
  readonly #right: Triple
  readonly #up: Triple
  readonly #scale: number
  readonly #offset: Point2
  /** Walls that face the eye, by index. */
  readonly front: readonly boolean[]
  readonly #walls: readonly { readonly normal: Triple; readonly distance: number }[]

  constructor(
    private readonly scene: Scene,
    [theta, phi]: readonly [number, number],
    size: number,
  ) {
    const [t, p] = [(theta * Math.PI) / 180, (phi * Math.PI) / 180]
    this.eye = [Math.sin(t) * Math.cos(p), Math.sin(t) * Math.sin(p), Math.cos(t)]
    this.#right = [-Math.sin(p), Math.cos(p), 0]
    this.#up = [-Math.cos(t) * Math.cos(p), -Math.cos(t) * Math.sin(p), Math.sin(t)]
    this.#walls = scene.zone.faces.map(face => wallOf(face.map(i => scene.zone.vertices[i])))
    this.front = this.#walls.map(({ normal }) => dot(normal, this.eye) > -FLAT)

    const extent = [
      ...scene.zone.vertices,
      ...scene.points.filter(({ named }) => named).map(({ k }) => k),
      ...scene.reciprocal,
    ]
    const flat = extent.map(k => this.#across(k))
    const [xs, ys] = [flat.map(([x]) => x), flat.map(([, y]) => y)]
    const [left, right, low, high] = [Math.min(...xs), Math.max(...xs), Math.min(...ys), Math.max(...ys)]
    this.#scale = (size - 2 * MARGIN) / Math.max(right - left, high - low, Number.MIN_VALUE)
    this.width = (right - left) * this.#scale + 2 * MARGIN
    this.height = (high - low) * this.#scale + 2 * MARGIN
    this.#offset = [MARGIN - left * this.#scale, MARGIN + high * this.#scale]
  }

  #across = (k: Triple): Point2 => [dot(k, this.#right), dot(k, this.#up)]

  project(k: Triple): Point2 {
    const [x, y] = this.#across(k)
    return [this.#offset[0] + x * this.#scale, this.#offset[1] - y * this.#scale]
  }

  /** A wall of the zone stands between the eye and k. */
  isHidden(k: Triple): boolean {
    // The ray from k towards the eye: where it is within all half-spaces at once.
    let from = 0
    let to = Number.POSITIVE_INFINITY
    const margin = FLAT * this.scene.zone.circumradius
    if (this.#walls.length === 0) return false
    for (const { normal, distance } of this.#walls) {
      const speed = dot(normal, this.eye)
      const room = distance - dot(normal, k) - margin
      if (Math.abs(speed) < FLAT) {
        if (room < 0) return false
      } else if (speed > 0) to = Math.min(to, room / speed)
      else from = Math.max(from, room / speed)
    }
    return to - from > margin
  }

  /** Parts of a line, each wholly hidden or wholly in sight. */
  parts(from: Triple, to: Triple): { from: Triple; to: Triple; hidden: boolean }[] {
    const cuts = [0, 1, ...this.#wallCrossings(from, to), ...this.#outlineCrossings(from, to)].sort(
      (a, b) => a - b,
    )
    const parts: { from: Triple; to: Triple; hidden: boolean }[] = []
    for (let i = 1; i < cuts.length; i++) {
      if (cuts[i] - cuts[i - 1] < FLAT) continue
      const hidden = this.isHidden(along(from, to, (cuts[i - 1] + cuts[i]) / 2))
      const last = parts.at(-1)
      if (last?.hidden === hidden) last.to = along(from, to, cuts[i])
      else parts.push({ from: along(from, to, cuts[i - 1]), to: along(from, to, cuts[i]), hidden })
    }
    return parts
  }

  #wallCrossings(from: Triple, to: Triple): number[] {
    return this.#walls
      .map(({ normal, distance }) => (distance - dot(normal, from)) / (dot(normal, to) - dot(normal, from)))
      .filter(t => t > 0 && t < 1)
  }

  /** Where the line passes behind the outline of the solid. */
  #outlineCrossings(from: Triple, to: Triple): number[] {
    const [a, b] = [this.#across(from), this.#across(to)]
    return this.scene.zone.edges.flatMap(([i, j]) => {
      const [c, d] = [this.#across(this.scene.zone.vertices[i]), this.#across(this.scene.zone.vertices[j])]
      const t = crossing(a, b, c, d)
      return t === undefined ? [] : [t]
    })
  }
}

/** Cosines smaller than this are a face seen edge-on; lengths smaller than this part of the zone are nothing. */
const FLAT = 1e-9

function wallOf(corners: readonly Triple[]): { normal: Triple; distance: number } {
  let area: Triple = [0, 0, 0]
  for (let i = 0; i < corners.length; i++) {
    const [u, v] = [corners[i], corners[(i + 1) % corners.length]]
    area = [
      area[0] + u[1] * v[2] - u[2] * v[1],
      area[1] + u[2] * v[0] - u[0] * v[2],
      area[2] + u[0] * v[1] - u[1] * v[0],
    ]
  }
  const size = Math.hypot(...area)
  const normal: Triple = [area[0] / size, area[1] / size, area[2] / size]
  return { normal, distance: dot(normal, corners[0]) }
}

function crossing(a: Point2, b: Point2, c: Point2, d: Point2): number | undefined {
  const [ux, uy, vx, vy] = [b[0] - a[0], b[1] - a[1], d[0] - c[0], d[1] - c[1]]
  const area = ux * vy - uy * vx
  if (Math.abs(area) <= FLAT * Math.hypot(ux, uy) * Math.hypot(vx, vy)) return undefined
  const t = ((c[0] - a[0]) * vy - (c[1] - a[1]) * vx) / area
  const s = ((c[0] - a[0]) * uy - (c[1] - a[1]) * ux) / area
  return t > 0 && t < 1 && s >= 0 && s <= 1 ? t : undefined
}

const line = (camera: Camera, from: Triple, to: Triple, attributes: string): string => {
  const [[x1, y1], [x2, y2]] = [camera.project(from), camera.project(to)]
  return `<line x1="${n(x1)}" y1="${n(y1)}" x2="${n(x2)}" y2="${n(y2)}" ${attributes}/>`
}

function faces({ zone, dimension }: Scene, camera: Camera, { face }: FigureColours): string[] {
  const corners = (indices: readonly number[]) =>
    indices.map(i => camera.project(zone.vertices[i]).map(n).join(',')).join(' ')
  if (dimension === 2)
    return [
      `<polygon class="face" points="${corners(zone.vertices.map((_, i) => i))}" fill="${face}" fill-opacity="0.05"/>`,
    ]
  return zone.faces.flatMap((indices, i) =>
    camera.front[i]
      ? [`<polygon class="face" points="${corners(indices)}" fill="${face}" fill-opacity="0.05"/>`]
      : [],
  )
}

function edges(
  { zone, dimension }: Scene,
  camera: Camera,
  { ink }: FigureColours,
  visible: boolean,
): string[] {
  return zone.edges.flatMap(([i, j]) => {
    const inSight =
      dimension < 3 || zone.faces.some((face, f) => camera.front[f] && face.includes(i) && face.includes(j))
    if (inSight !== visible) return []
    const style = visible ? 'stroke-width="1.3"' : 'stroke-width="0.8" stroke-dasharray="4 3"'
    return line(
      camera,
      zone.vertices[i],
      zone.vertices[j],
      `class="edge ${visible ? 'front' : 'hidden'}" stroke="${ink}" stroke-linecap="round" ${style}`,
    )
  })
}

/** Reciprocal vectors from Γ: dashed where the solid hides them. */
function reciprocal({ reciprocal }: Scene, camera: Camera, { ink }: FigureColours): string[] {
  return reciprocal.flatMap(b => {
    const parts = camera
      .parts([0, 0, 0], b)
      .map(({ from, to, hidden }) =>
        line(
          camera,
          from,
          to,
          `class="vector" stroke="${ink}" stroke-width="0.9"${hidden ? ' stroke-dasharray="2 3"' : ''}`,
        ),
      )
    return [...parts, arrowHead(camera, [0, 0, 0], b, 1, ink, 7)]
  })
}

/** A filled triangle whose tip stands at the part `t` of the way; nothing where the line is seen end-on. */
function arrowHead(camera: Camera, from: Triple, to: Triple, t: number, fill: string, size: number): string {
  const [[x1, y1], [x2, y2]] = [camera.project(from), camera.project(to)]
  const length = Math.hypot(x2 - x1, y2 - y1)
  if (length < 2 * size) return ''
  const [ux, uy] = [(x2 - x1) / length, (y2 - y1) / length]
  const [x, y] = [x1 + t * (x2 - x1), y1 + t * (y2 - y1)]
  const corner = (back: number, side: number) =>
    `${n(x - back * ux - side * uy)},${n(y - back * uy + side * ux)}`
  return `<polygon class="arrow" points="${n(x)},${n(y)} ${corner(size, size * 0.36)} ${corner(size, -size * 0.36)}" fill="${fill}"/>`
}

function pathSegment({ from, to, piece }: SceneSegment, camera: Camera, { path }: FigureColours): string[] {
  return [
    line(
      camera,
      from.k,
      to.k,
      `class="path" data-piece="${piece + 1}" data-from="${escapeXml(from.label)}" data-to="${escapeXml(to.label)}" stroke="${path}" stroke-width="2.2" stroke-linecap="round"`,
    ),
    arrowHead(camera, from.k, to.k, 0.56, path, 8),
  ]
}

/** From a point outside the zone to its equivalent inside. */
function outsideLinks({ points }: Scene, camera: Camera, { ink }: FigureColours): string[] {
  return points.flatMap(({ k, folded, named }) =>
    folded && named
      ? [
          line(
            camera,
            k,
            folded,
            `class="folded" stroke="${ink}" stroke-opacity="0.5" stroke-width="0.7" stroke-dasharray="1 3"`,
          ),
        ]
      : [],
  )
}

const DIRECTIONS = Array.from({ length: 16 }, (_, i) => (i * Math.PI) / 8)
const DISTANCES = [11, 17, 25]

/** Each label where it covers least: not on another label, not on a point, off the lines where there is room. */
function labels(
  scene: Scene,
  points: Scene['points'],
  camera: Camera,
  { ink, background }: FigureColours,
): string[] {
  const taken: Box[] = points.map(({ k }) => around(camera.project(k), 6, 6))
  const lines = [
    ...scene.segments.map(({ from, to }) => [camera.project(from.k), camera.project(to.k)] as const),
    ...scene.zone.edges.map(
      ([i, j]) => [camera.project(scene.zone.vertices[i]), camera.project(scene.zone.vertices[j])] as const,
    ),
  ]
  const centre = camera.project([0, 0, 0])
  const set = (name: SceneName, at: Point2, kind: string): string => {
    const w = 9 * [...name.base].length + 6 * name.sub.length
    const outward = Math.atan2(at[1] - centre[1], at[0] - centre[0])
    let best: { box: Box; cost: number } | undefined
    for (const reach of DISTANCES) {
      for (const turn of DIRECTIONS) {
        const box = around([at[0] + reach * Math.cos(turn), at[1] + reach * Math.sin(turn)], w, FONT)
        const inside =
          box.x > 1 && box.y > 1 && box.x + box.w < camera.width - 1 && box.y + box.h < camera.height - 1
        const cost =
          40 * taken.filter(other => overlaps(box, other)).length +
          3 * lines.filter(([a, b]) => meets(box, a, b)).length +
          (1 - Math.cos(turn - outward)) +
          reach / 12 +
          (inside ? 0 : 100)
        if (!best || cost < best.cost) best = { box, cost }
      }
    }
    const { box } = best!
    taken.push(box)
    const style = kind === 'vector' ? ' font-weight="bold"' : ' font-style="italic"'
    const sub = name.sub
      ? `<tspan font-size="${n(FONT * 0.7)}" font-style="normal" dy="4">${escapeXml(name.sub)}</tspan>`
      : ''
    return `<text class="${kind}-label" x="${n(box.x + box.w / 2)}" y="${n(box.y + box.h * 0.78)}" text-anchor="middle" fill="${ink}" stroke="${background}" stroke-width="3" stroke-linejoin="round" paint-order="stroke"${style}>${escapeXml(name.base)}${sub}</text>`
  }
  const vectors = scene.reciprocal.map((b, i) =>
    set({ base: 'b', sub: String(i + 1) }, camera.project(b), 'vector'),
  )
  return [...vectors, ...points.map(({ name, k }) => set(name, camera.project(k), 'point'))]
}

const around = ([x, y]: Point2, w: number, h: number): Box => ({ x: x - w / 2, y: y - h / 2, w, h })
const overlaps = (a: Box, b: Box): boolean =>
  a.x < b.x + b.w && b.x < a.x + a.w && a.y < b.y + b.h && b.y < a.y + a.h

/** A line runs through a box. */
function meets({ x, y, w, h }: Box, [ax, ay]: Point2, [bx, by]: Point2): boolean {
  let from = 0
  let to = 1
  for (const [start, step, low, high] of [
    [ax, bx - ax, x, x + w],
    [ay, by - ay, y, y + h],
  ]) {
    if (step === 0) {
      if (start < low || start > high) return false
      continue
    }
    const [t1, t2] = [(low - start) / step, (high - start) / step]
    from = Math.max(from, Math.min(t1, t2))
    to = Math.min(to, Math.max(t1, t2))
  }
  return from <= to
}
