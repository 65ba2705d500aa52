/** Where the eye stands. One transformation serves lines, labels and solids alike. */
import type { Triple } from '../../server/src/protocol.ts'

export interface Stand {
  /** Degrees from z towards the plane, and about z from x. */
  theta: number
  phi: number
  zoom: number
  /** In parts of the smaller side of the window. */
  pan: [number, number]
  perspective: boolean
}

const START: Readonly<Stand> = { theta: 72, phi: 24, zoom: 1, pan: [0, 0], perspective: false }
/** Seen from above, x is to the right. */
const FROM_ABOVE = -90

/** The eye's distance in perspective, in parts of the scene's radius. */
const DISTANCE = 5
/** Room for labels around the scene, in px; less where the window is small. */
const MARGIN = 34
/** A scene flatter than this, in parts of its size, is seen edge-on. */
const SMALL = 0.2
export const ZOOMS: readonly [number, number] = [0.2, 12]

export class Camera {
  readonly stand: Stand = { ...START, pan: [0, 0] }
  width = 1
  height = 1
  /** Of the scene, from Γ. */
  radius = 1
  /** What is to be seen at zoom 1, as seen from where it was fitted. */
  #fitted = { left: -1, right: 1, low: -1, high: 1 }

  eye: Triple = [0, 0, 1]
  right: Triple = [1, 0, 0]
  up: Triple = [0, 1, 0]
  #scale = 1
  #centre: readonly [number, number] = [0, 0]

  update(): void {
    const { theta, phi, zoom, pan } = this.stand
    const [t, p] = [(theta * Math.PI) / 180, (phi * Math.PI) / 180]
    this.eye = [Math.sin(t) * Math.cos(p), Math.sin(t) * Math.sin(p), Math.cos(t)]
    this.right = [-Math.sin(p), Math.cos(p), 0]
    this.up = [-Math.cos(t) * Math.cos(p), -Math.cos(t) * Math.sin(p), Math.sin(t)]
    const { left, right, low, high } = this.#fitted
    const side = Math.min(this.width, this.height)
    const margin = Math.min(MARGIN, 0.12 * side)
    const [across, upwards] = [
      Math.max(right - left, SMALL * this.radius),
      Math.max(high - low, SMALL * this.radius),
    ]
    this.#scale = zoom * Math.min((this.width - 2 * margin) / across, (this.height - 2 * margin) / upwards)
    this.#centre = [
      this.width / 2 + pan[0] * side - (this.#scale * (left + right)) / 2,
      this.height / 2 + pan[1] * side + (this.#scale * (low + high)) / 2,
    ]
  }

  /** Take the window's middle and scale from what is to be seen, as seen from where the eye stands now. */
  fit(scene: readonly Triple[]): void {
    this.update()
    const [xs, ys] = [scene.map(k => dot(k, this.right)), scene.map(k => dot(k, this.up))]
    this.#fitted = {
      left: Math.min(...xs),
      right: Math.max(...xs),
      low: Math.min(...ys),
      high: Math.max(...ys),
    }
    this.radius = Math.max(...scene.map(size))
    this.update()
  }

  get #distance(): number {
    return DISTANCE * this.radius
  }

  /** Towards the eye; larger is nearer. */
  depth = (k: Triple): number => dot(k, this.eye)

  project(k: Triple): [x: number, y: number] {
    const f = this.stand.perspective
      ? this.#distance / Math.max(1e-3 * this.radius, this.#distance - this.depth(k))
      : 1
    return [
      this.#centre[0] + f * this.#scale * dot(k, this.right),
      this.#centre[1] - f * this.#scale * dot(k, this.up),
    ]
  }

  /** A plane n·k = distance shows its outer side. */
  isFacing(normal: Triple, distance: number): boolean {
    return this.stand.perspective
      ? this.#distance * dot(normal, this.eye) > distance
      : dot(normal, this.eye) > 1e-9
  }

  /** Row-major world-to-clip matrix in two steps, for WebGL. `reach`: of all that is drawn, from Γ. */
  matrices(reach: number): { view: number[]; projection: number[] } {
    const view = [...this.right, 0, ...this.up, 0, ...this.eye, 0, 0, 0, 0, 1]
    const [sx, sy] = [(2 * this.#scale) / this.width, (2 * this.#scale) / this.height]
    const [px, py] = [(2 * this.#centre[0]) / this.width - 1, 1 - (2 * this.#centre[1]) / this.height]
    if (!this.stand.perspective)
      return { view, projection: [sx, 0, 0, px, 0, sy, 0, py, 0, 0, -1 / reach, 0, 0, 0, 0, 1] }
    const d = this.#distance
    const [near, far] = [0.02 * d, d + reach]
    const [a, b] = [(far + near) / (far - near), (-2 * far * near) / (far - near)]
    return {
      view,
      projection: [sx * d, 0, -px, px * d, 0, sy * d, -py, py * d, 0, 0, -a, a * d + b, 0, 0, -1, d],
    }
  }

  stands(theta: number, phi: number): void {
    Object.assign(this.stand, { theta, phi })
  }

  turn(dx: number, dy: number): void {
    const { stand } = this
    stand.phi = (stand.phi - dx) % 360
    stand.theta = Math.min(180, Math.max(0, stand.theta - dy))
  }

  /** Look along a direction, from its tip. */
  lookAlong(direction: Triple): void {
    const length = Math.hypot(...direction)
    const theta = (Math.acos(Math.max(-1, Math.min(1, direction[2] / length))) * 180) / Math.PI
    this.stand.theta = theta
    const flat = Math.hypot(direction[0], direction[1]) / length
    this.stand.phi = flat > 1e-9 ? (Math.atan2(direction[1], direction[0]) * 180) / Math.PI : FROM_ABOVE
  }

  zoomBy(factor: number, at?: readonly [number, number]): void {
    const { stand } = this
    const zoom = Math.min(ZOOMS[1], Math.max(ZOOMS[0], stand.zoom * factor))
    const side = Math.min(this.width, this.height)
    if (at)
      for (const i of [0, 1] as const) {
        const middle = this.#centre[i]
        stand.pan[i] += ((1 - zoom / stand.zoom) * (at[i] - middle)) / side
      }
    stand.zoom = zoom
  }

  panBy(dx: number, dy: number): void {
    const side = Math.min(this.width, this.height)
    this.stand.pan[0] += dx / side
    this.stand.pan[1] += dy / side
  }
}

export const dot = (u: Triple, v: Triple): number => u[0] * v[0] + u[1] * v[1] + u[2] * v[2]
export const along = (u: Triple, v: Triple, t: number): Triple => [
  u[0] + t * (v[0] - u[0]),
  u[1] + t * (v[1] - u[1]),
  u[2] + t * (v[2] - u[2]),
]
export const sum = (u: Triple, v: Triple): Triple => [u[0] + v[0], u[1] + v[1], u[2] + v[2]]
export const size = (u: Triple): number => Math.hypot(u[0], u[1], u[2])
