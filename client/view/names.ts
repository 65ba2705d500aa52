/** Labels and dots of the points, as elements: a dot is a button, so that keys and screen readers reach it. */
import type { Scene, SceneName, ScenePoint, Triple } from '../../server/src/protocol.ts'
import { pieceStarts } from './ink.ts'

export interface Name {
  readonly key: string
  readonly element: HTMLElement
  readonly dot?: HTMLButtonElement
  readonly k: Triple
  readonly point?: ScenePoint
  /** Higher ones choose their place first. */
  readonly rank: number
  width: number
  height: number
}

const RANKS = { origin: 3, vector: 2.5, named: 2, spare: 1, order: 0.5 }

interface Answers {
  hover(label: string | undefined): void
  pick(point: ScenePoint): void
}

/** The names of points, of the reciprocal vectors, and of the path's pieces where there are several. */
export function namesOf(
  scene: Scene,
  points: readonly ScenePoint[],
  withPath: boolean,
  answers: Answers,
): Name[] {
  const starts = withPath ? pieceStarts(scene.segments) : []
  return [
    ...points.map(point => pointName(point, answers)),
    ...scene.reciprocal.map((k, i) =>
      name(`vector ${i}`, { base: 'b', sub: String(i + 1) }, 'vector', k, RANKS.vector),
    ),
    ...starts.map(({ k, piece }) => {
      const order = name(`piece ${piece}`, { base: String(piece), sub: '' }, 'order', k, RANKS.order)
      order.element.title = `Piece ${piece} of the path begins here`
      return order
    }),
  ]
}

/** Puts them into the page and measures them; the dot that had the focus keeps it. */
export function putInto(parent: HTMLElement, names: readonly Name[]): void {
  const focused = (document.activeElement as HTMLElement | null)?.dataset.label
  const dots = names.flatMap(({ dot }) => (dot ? [dot] : []))
  parent.replaceChildren(...dots, ...names.map(({ element }) => element))
  for (const one of names) [one.width, one.height] = [one.element.offsetWidth, one.element.offsetHeight]
  if (focused !== undefined) dots.find(({ dataset }) => dataset.label === focused)?.focus()
}

/** A name with a true subscript. */
export function typeset({ base, sub }: SceneName): (string | HTMLElement)[] {
  if (!sub) return [base]
  const below = document.createElement('sub')
  below.textContent = sub
  return [base, below]
}

function name(key: string, text: SceneName, kind: string, k: Triple, rank: number): Name {
  const element = document.createElement('span')
  element.className = `name ${kind}`
  element.append(...typeset(text))
  element.setAttribute('aria-hidden', 'true')
  return { key, element, k, rank, width: 0, height: 0 }
}

function pointName(point: ScenePoint, { hover, pick }: Answers): Name {
  const { label, severity, origin, named, facts, k } = point
  const kind = `${severity ?? ''} ${named ? 'named' : 'spare'}`
  const dot = document.createElement('button')
  dot.type = 'button'
  dot.className = `dot ${origin} ${kind}`
  dot.dataset.label = label
  dot.setAttribute('aria-label', `${label}: ${facts.map(([term, value]) => `${term} ${value}`).join('; ')}`)
  for (const event of ['pointerenter', 'focus']) dot.addEventListener(event, () => hover(label))
  for (const event of ['pointerleave', 'blur']) dot.addEventListener(event, () => hover(undefined))
  dot.addEventListener('click', () => pick(point))
  const rank = !named ? RANKS.spare : label === 'Γ' ? RANKS.origin : RANKS.named
  const text = name(label, point.name, `point ${kind}`, k, rank)
  text.element.dataset.label = label
  return { ...text, dot, point }
}
