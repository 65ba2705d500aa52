/** Mouse, touch and keyboard on the stage. */
import type { Camera } from './camera.ts'

const DEGREES_PER_PX = 0.45
const DEGREES_PER_KEY = 6
const PX_PER_KEY = 20
const ZOOM_PER_KEY = 1.15
const ZOOM_PER_WHEEL = 1.0015
const MIDDLE_OR_RIGHT = 6

export interface Gestures {
  /** A flat drawing is moved, not turned. */
  isFlat(): boolean
  /** The camera moved. */
  moved(): void
  /** The camera has come to rest. */
  rested(): void
  /** Back to the first view. */
  home(): void
  /** The pointer moves over the stage without a button. */
  pointed(event: PointerEvent): void
  left(): void
  /** A key that is none of the camera's; true where it was taken. */
  pressed(key: string): boolean
}

interface Finger {
  readonly x: number
  readonly y: number
}

export function listen(stage: HTMLElement, camera: Camera, gestures: Gestures): void {
  const fingers = new Map<number, Finger>()
  const isOnDot = ({ target }: Event) => (target as HTMLElement).closest('button') !== null

  stage.addEventListener('pointerdown', event => {
    if (isOnDot(event)) return
    stage.setPointerCapture(event.pointerId)
    fingers.set(event.pointerId, { x: event.clientX, y: event.clientY })
    stage.focus({ preventScroll: true })
  })
  for (const name of ['pointerup', 'pointercancel'] as const)
    stage.addEventListener(name, ({ pointerId }) => {
      if (fingers.delete(pointerId) && fingers.size === 0) gestures.rested()
    })
  stage.addEventListener('pointermove', event => {
    const last = fingers.get(event.pointerId)
    if (!last) {
      gestures.pointed(event)
      return
    }
    const now = { x: event.clientX, y: event.clientY }
    const other = [...fingers].find(([id]) => id !== event.pointerId)?.[1]
    drag(last, now, other, event.shiftKey || (event.buttons & MIDDLE_OR_RIGHT) > 0)
    fingers.set(event.pointerId, now)
    gestures.moved()
  })
  stage.addEventListener('pointerleave', () => gestures.left())
  stage.addEventListener('contextmenu', event => event.preventDefault())
  stage.addEventListener('wheel', wheel, { passive: false })
  stage.addEventListener('dblclick', event => {
    if (!isOnDot(event)) gestures.home()
  })
  stage.addEventListener('keydown', event => {
    if (!press(event)) return
    event.preventDefault()
    gestures.moved()
    gestures.rested()
  })

  function drag(last: Finger, now: Finger, other: Finger | undefined, moves: boolean): void {
    const [dx, dy] = [now.x - last.x, now.y - last.y]
    if (other) {
      const spread = ({ x, y }: Finger) => Math.hypot(x - other.x, y - other.y)
      camera.zoomBy(spread(now) / Math.max(1, spread(last)))
      camera.panBy(dx / 2, dy / 2)
    } else if (moves || gestures.isFlat()) camera.panBy(dx, dy)
    else camera.turn(dx * DEGREES_PER_PX, dy * DEGREES_PER_PX)
  }

  function wheel(event: WheelEvent): void {
    event.preventDefault()
    const { left, top } = stage.getBoundingClientRect()
    camera.zoomBy(ZOOM_PER_WHEEL ** -event.deltaY, [event.clientX - left, event.clientY - top])
    gestures.moved()
    gestures.rested()
  }

  function press({ key, shiftKey }: KeyboardEvent): boolean {
    const [x, y] = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] }[key] ?? [
      0, 0,
    ]
    if (x || y) {
      if (shiftKey || gestures.isFlat()) camera.panBy(PX_PER_KEY * x, PX_PER_KEY * y)
      else camera.turn(DEGREES_PER_KEY * x, DEGREES_PER_KEY * y)
    } else if (key === '+' || key === '=') camera.zoomBy(ZOOM_PER_KEY)
    else if (key === '-') camera.zoomBy(1 / ZOOM_PER_KEY)
    else if (key === '0') gestures.home()
    else return gestures.pressed(key)
    return true
  }
}
