/** The facts of a point beside it: the same as the hover in the text tells. */
import type { ScenePoint } from '../../server/src/protocol.ts'
import type { Camera } from './camera.ts'
import { typeset } from './names.ts'

/** A stage narrower than this has no room for facts beside a point, in px. */
const NARROW = 520
const MARGIN = 4

export function fillCard(card: HTMLElement, { name, facts, k }: ScenePoint, camera: Camera): void {
  const head = document.createElement('strong')
  head.append(...typeset(name))
  const list = document.createElement('dl')
  for (const [term, value] of facts) {
    const [left, right] = [document.createElement('dt'), document.createElement('dd')]
    left.textContent = term
    right.textContent = value
    list.append(left, right)
  }
  card.replaceChildren(head, list)

  const [x, y] = camera.project(k)
  const { offsetWidth: width, offsetHeight: height } = card
  const isNarrow = camera.width < NARROW
  const beside = x < camera.width / 2 ? Math.min(x + 18, camera.width - width - MARGIN) : x - 18 - width
  // Where there is no room beside the point, the facts stand at the far end.
  const below = isNarrow ? (y < camera.height / 2 ? camera.height : 0) : y + 14
  card.style.left = `${Math.max(MARGIN, isNarrow ? 0 : beside)}px`
  card.style.top = `${Math.max(MARGIN, Math.min(below, camera.height - height - MARGIN))}px`
}
