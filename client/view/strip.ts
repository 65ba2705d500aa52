/** The band strip: empty-lattice bands along the path, with a marker that moves along it. */
import type { Bands, BandSegment, Triple } from '../../server/src/protocol.ts'
import { along } from './camera.ts'

const SVG = 'http://www.w3.org/2000/svg'
const LEFT = 46
const RIGHT = 14
const TOP = 8
const BOTTOM = 36
/** A pointer this near to a band is on it, in px. */
const NEAR = 9
/** A step of the marker by key, in parts of the path. */
const STEP = 1 / 120

export interface Spot {
  readonly distance: number
  readonly k: Triple
}

export class Strip {
  #bands: Bands | undefined
  #distance: number | undefined
  #pointerY: number | undefined
  readonly #svg: SVGSVGElement
  readonly #marker: SVGLineElement
  readonly #dot: SVGCircleElement
  readonly #note: HTMLElement

  constructor(
    private readonly element: HTMLElement,
    private readonly moved: (spot: Spot | undefined) => void,
  ) {
    this.#svg = make('svg', { role: 'img', 'aria-label': 'Empty-lattice bands along the path' })
    this.#marker = make('line', { class: 'marker' })
    this.#dot = make('circle', { class: 'marker-dot', r: '4' })
    this.#note = document.createElement('div')
    this.#note.className = 'strip-note'
    this.#note.setAttribute('role', 'status')
    element.append(this.#svg, this.#note)
    element.addEventListener('pointermove', event => this.#point(event))
    element.addEventListener('pointerdown', event => this.#point(event))
    element.addEventListener('pointerleave', () => this.#move(undefined))
    element.addEventListener('keydown', event => this.#key(event))
    element.addEventListener('blur', () => this.#move(undefined))
  }

  show(bands: Bands | undefined): void {
    this.#bands = bands
    if (this.#distance !== undefined) this.#move(bands && Math.min(this.#distance, bands.length))
    this.draw()
  }

  draw(): void {
    const bands = this.#bands
    const { clientWidth: width, clientHeight: height } = this.element
    this.#svg.replaceChildren()
    this.element.dataset.branches = String(
      bands?.segments.reduce((sum, { branches }) => sum + branches.length, 0) ?? 0,
    )
    if (!bands || width === 0) return
    const svg = this.#svg
    svg.setAttribute('viewBox', `0 0 ${width} ${height}`)
    const bottom = height - BOTTOM
    const frame = {
      x: String(LEFT),
      y: String(TOP),
      width: String(width - LEFT - RIGHT),
      height: String(bottom - TOP),
    }
    const clip = make('clipPath', { id: 'strip-frame' })
    clip.append(make('rect', frame))
    svg.append(clip)

    for (const energy of energyTicks(bands.top, height)) {
      const y = this.#y(energy)
      svg.append(
        make('line', { class: 'tick', x1: String(LEFT - 4), x2: String(LEFT), y1: String(y), y2: String(y) }),
      )
      svg.append(text(String(energy), LEFT - 7, y + 3.5, 'energy'))
    }
    const title = text('E (eV)', 12, (TOP + bottom) / 2, 'axis')
    title.setAttribute('transform', `rotate(-90 12 ${(TOP + bottom) / 2})`)
    svg.append(title)

    const curves = make('g', { 'clip-path': 'url(#strip-frame)', class: 'bands' })
    for (const { start, length, branches } of bands.segments) {
      const [left, right] = [this.#x(start), this.#x(start + length)]
      for (const [e0, e1, e2, states] of branches) {
        const d = `M${left} ${this.#y(e0)}Q${(left + right) / 2} ${this.#y(e1)} ${right} ${this.#y(e2)}`
        curves.append(make('path', { d, 'stroke-width': String(0.9 + 0.7 * Math.log2(states)) }))
      }
    }
    svg.append(curves)
    for (const { distance, names } of bands.ticks) {
      const x = this.#x(distance)
      svg.append(
        make('line', {
          class: names.length > 1 ? 'joint break' : 'joint',
          x1: String(x),
          x2: String(x),
          y1: String(TOP),
          y2: String(bottom),
        }),
      )
    }
    this.#drawLabels(bands, bottom)
    svg.append(make('rect', { ...frame, class: 'frame' }), this.#marker, this.#dot)
    this.#drawMarker()
  }

  /** A label that would touch the one before stands a row lower. */
  #drawLabels({ ticks }: Bands, bottom: number): void {
    const clearFrom = [Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY]
    for (const { distance, names } of ticks) {
      const x = this.#x(distance)
      const label = text('', x, bottom + 15, 'joint-label')
      names.forEach(({ base, sub }, i) => {
        if (i > 0) label.append(span('\u2009|\u2009'))
        label.append(span(base))
        if (sub) label.append(span(sub, { dy: '3', 'font-size': '70%' }), span('\u200b', { dy: '-3' }))
      })
      this.#svg.append(label)
      const half = label.getComputedTextLength() / 2
      const row = clearFrom.findIndex(from => x - half >= from)
      if (row < 0) label.remove()
      else {
        clearFrom[row] = x + half + 4
        label.setAttribute('y', String(bottom + 15 + 14 * row))
      }
    }
  }

  /** Puts the marker where the pointer is on the path in the zone. */
  markAt(distance: number | undefined): void {
    this.#pointerY = undefined
    this.#distance = distance
    this.#drawMarker()
  }

  #x(distance: number): number {
    const { length } = this.#bands!
    return LEFT + (length > 0 ? distance / length : 0) * (this.element.clientWidth - LEFT - RIGHT)
  }

  #y(energy: number): number {
    return TOP + (this.element.clientHeight - TOP - BOTTOM) * (1 - energy / this.#bands!.top)
  }

  #point(event: PointerEvent): void {
    const bands = this.#bands
    if (!bands) return
    const box = this.element.getBoundingClientRect()
    const part = (event.clientX - box.left - LEFT) / (box.width - LEFT - RIGHT)
    this.#pointerY = event.clientY - box.top
    this.#move(Math.min(1, Math.max(0, part)) * bands.length)
  }

  #key(event: KeyboardEvent): void {
    const bands = this.#bands
    const steps = { ArrowLeft: -1, ArrowRight: 1, PageUp: -10, PageDown: 10, Home: -1000, End: 1000 }[
      event.key
    ]
    if (!bands || steps === undefined) return
    event.preventDefault()
    this.#pointerY = undefined
    const next = (this.#distance ?? 0) + steps * STEP * bands.length
    this.#move(Math.min(bands.length, Math.max(0, next)))
  }

  #move(distance: number | undefined): void {
    this.#distance = distance
    const segment = distance === undefined ? undefined : this.#segmentAt(distance)
    this.moved(
      segment && distance !== undefined
        ? { distance, k: along(segment.from.k, segment.to.k, part(segment, distance)) }
        : undefined,
    )
    this.#drawMarker()
  }

  #segmentAt(distance: number): BandSegment | undefined {
    const segments = this.#bands?.segments ?? []
    return segments.find(({ start, length }) => distance <= start + length) ?? segments.at(-1)
  }

  #drawMarker(): void {
    const distance = this.#distance
    const segment = distance === undefined ? undefined : this.#segmentAt(distance)
    const isShown = segment !== undefined && distance !== undefined
    this.#marker.style.display = isShown ? '' : 'none'
    this.#dot.style.display = 'none'
    this.#note.textContent = ''
    if (!isShown) return
    const x = this.#x(distance)
    for (const [name, value] of [
      ['x1', x],
      ['x2', x],
      ['y1', TOP],
      ['y2', this.element.clientHeight - BOTTOM],
    ] as const)
      this.#marker.setAttribute(name, String(value))
    this.#note.textContent = this.#describe(segment, distance, x)
  }

  /** The band under the pointer, or the lowest one, and how many states it holds there. */
  #describe(segment: BandSegment, distance: number, x: number): string {
    const { top, unit } = this.#bands!
    const t = part(segment, distance)
    const energies = segment.branches.map(([e0, e1, e2, states]) => ({
      energy: (1 - t) ** 2 * e0 + 2 * t * (1 - t) * e1 + t ** 2 * e2,
      states,
    }))
    const [from, to] = [printed(segment.from.label), printed(segment.to.label)]
    const place = `${from} – ${to}, ${(t * segment.length).toFixed(3)} ${unit} from ${from}`
    const y = this.#pointerY
    const nearest =
      y === undefined
        ? undefined
        : energies
            .filter(({ energy }) => Math.abs(this.#y(energy) - y) < NEAR)
            .sort((a, b) => Math.abs(this.#y(a.energy) - y) - Math.abs(this.#y(b.energy) - y))[0]
    if (!nearest) return place
    const same = energies.filter(({ energy }) => Math.abs(energy - nearest.energy) < SAME * top)
    const states = same.reduce((sum, one) => sum + one.states, 0)
    this.#dot.style.display = ''
    this.#dot.setAttribute('cx', String(x))
    this.#dot.setAttribute('cy', String(this.#y(nearest.energy)))
    return `${nearest.energy.toFixed(2)} eV, ${states} ${states === 1 ? 'state' : 'states'} · ${place}`
  }
}

/** With a true subscript, in a plain text. */
const printed = (label: string): string =>
  label.replace(/\d+(?='*$)/, digits => [...digits].map(digit => '₀₁₂₃₄₅₆₇₈₉'[Number(digit)]).join(''))

/** Energies nearer than this part of the strip's height are one to the eye. */
const SAME = 0.002

const part = ({ start, length }: BandSegment, distance: number): number =>
  length > 0 ? Math.min(1, Math.max(0, (distance - start) / length)) : 0

function energyTicks(top: number, height: number): number[] {
  const raw = top / Math.max(2, Math.floor(height / 44))
  const power = 10 ** Math.floor(Math.log10(raw))
  const step = [1, 2, 5, 10].map(m => m * power).find(candidate => candidate >= raw)!
  return Array.from({ length: Math.floor(top / step + 1e-9) + 1 }, (_, i) =>
    Number((i * step).toPrecision(12)),
  )
}

function make<K extends keyof SVGElementTagNameMap>(
  name: K,
  attributes: Record<string, string>,
): SVGElementTagNameMap[K] {
  const element = document.createElementNS(SVG, name)
  for (const [key, value] of Object.entries(attributes)) element.setAttribute(key, value)
  return element
}

function text(content: string, x: number, y: number, kind: string): SVGTextElement {
  const element = make('text', { x: String(x), y: String(y), class: kind })
  element.textContent = content
  return element
}

function span(content: string, attributes: Record<string, string> = {}): SVGTSpanElement {
  const element = make('tspan', attributes)
  element.textContent = content
  return element
}
