/** A picture of the stage for a slide or a page: what is seen, at a multiple of its size on the screen. */
import type { Camera } from './camera.ts'
import type { Name } from './names.ts'
import type { Solids } from './solids.ts'

export interface Sight {
  readonly stage: HTMLElement
  readonly glass: HTMLCanvasElement
  readonly camera: Camera
  readonly solids: Solids | undefined
  readonly names: readonly Name[]
  readonly ground: string
  drawInk(target: CanvasRenderingContext2D): void
}

/** PNG as base64. */
export function pictureOf(
  { stage, glass, camera, solids, names, ground, drawInk }: Sight,
  scale: 2 | 4,
): string | undefined {
  const { width, height } = camera
  const canvas = document.createElement('canvas')
  canvas.width = width * scale
  canvas.height = height * scale
  const picture = canvas.getContext('2d')
  if (!picture) return undefined
  picture.fillStyle = ground
  picture.fillRect(0, 0, canvas.width, canvas.height)
  if (solids) {
    solids.resize(width, height, scale)
    solids.draw(camera)
    picture.drawImage(glass, 0, 0, canvas.width, canvas.height)
    solids.resize(width, height, devicePixelRatio)
    solids.draw(camera)
  }
  picture.scale(scale, scale)
  drawInk(picture)
  const origin = stage.getBoundingClientRect()
  for (const name of names) {
    if (name.dot) {
      const [x, y] = camera.project(name.k)
      picture.fillStyle = getComputedStyle(name.element).color
      picture.beginPath()
      picture.arc(x, y, 3.4, 0, 2 * Math.PI)
      picture.fill()
    }
    if (name.element.style.visibility !== 'hidden') drawName(picture, name.element, origin)
  }
  return canvas.toDataURL('image/png').split(',')[1]
}

function drawName(picture: CanvasRenderingContext2D, label: HTMLElement, origin: DOMRect): void {
  const style = getComputedStyle(label)
  const box = label.getBoundingClientRect()
  const [left, top] = [box.left - origin.left, box.top - origin.top]
  if (label.classList.contains('order')) {
    picture.fillStyle = style.backgroundColor
    picture.beginPath()
    picture.roundRect(left, top, box.width, box.height, box.height / 2)
    picture.fill()
  }
  picture.textAlign = 'left'
  picture.textBaseline = 'alphabetic'
  picture.fillStyle = style.color
  picture.font = `${style.fontStyle} ${style.fontWeight} ${style.fontSize} ${style.fontFamily}`
  const [x, y] = [left + Number.parseFloat(style.paddingLeft), top + 0.76 * box.height]
  const base = label.firstChild?.textContent ?? ''
  picture.fillText(base, x, y)
  const sub = label.querySelector('sub')
  if (!sub) return
  const offset = picture.measureText(base).width
  picture.font = `${style.fontWeight} ${getComputedStyle(sub).fontSize} ${style.fontFamily}`
  picture.fillText(sub.textContent ?? '', x + offset, y + 3.5)
}
