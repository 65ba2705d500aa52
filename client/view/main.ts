/** The zone view inside its webview: takes finished geometry, draws it, and says what a person does with it. */
import { type FromView, LAST_SHELL_ZONE, readToView, type ToView } from '../messages.ts'
import type { Bands, Scene, ScenePoint, SceneSolid, TextRange, Triple } from '../../server/src/protocol.ts'
import { along, Camera, dot, type Stand } from './camera.ts'
import { element, Switches } from './controls.ts'
import { extentOf, Ink, type Marks, pieceStarts, triad } from './ink.ts'
import { distanceTo, LabelLayout, nearestOn, type Wanted } from './labels.ts'
import { dotRadii, Solids } from './solids.ts'
import { Strip } from './strip.ts'
import { onThemeChange, readTheme, type Theme } from './theme.ts'

declare function acquireVsCodeApi(): {
  postMessage(message: FromView): void
  getState(): unknown
  setState(state: unknown): void
}

/** What is kept over a reload. */
interface Kept {
  readonly uri?: string
  readonly stand?: Stand
  readonly switches?: Record<string, string>
}

const vscode = acquireVsCodeApi()
const kept = (vscode.getState() ?? {}) as Kept
/** A pointer this near to the path is on it, in px. */
const NEAR = 8
/** A stage narrower than this has no room for facts beside a point, in px. */
const NARROW = 520
const DEGREES_PER_PX = 0.45
const TURN_BY_KEY = 6

const stage = element<HTMLElement>('stage')
const glass = element<HTMLCanvasElement>('glass')
const paper = element<HTMLCanvasElement>('paper')
const names = element<HTMLElement>('names')
const card = element<HTMLElement>('card')
const reason = element<HTMLElement>('reason')
const words = element<HTMLElement>('words')
const hint = element<HTMLElement>('hint')
const g = paper.getContext('2d')!

const camera = new Camera()
Object.assign(camera.stand, kept.stand)
const layout = new LabelLayout()
let theme: Theme = readTheme()
let solids: Solids | undefined
let ink: Ink | undefined
let scene: Scene | undefined
let version = -1
let uri = kept.uri
let bands: Bands | undefined
let marks: Marks = {}
/** What the text cursor is on; the pointer's own marks go before it. */
let cursorMarks: Marks = {}
let spot: Triple | undefined
let hovered: string | undefined
/** Labels that begin a new piece and are not in the text yet: a piece has two. */
let waiting: string[] = []
let beginsPiece = false
let zoneSolid: { n: number; solid: SceneSolid } | undefined
let drawnFrames = 0
let isPending = false

const switches = new Switches(kept.switches ?? {}, changed)
const strip = new Strip(element('strip'), moved => {
  spot = moved?.k
  redraw()
})

function say(message: FromView): void {
  vscode.postMessage(message)
}

function keep(): void {
  vscode.setState({ uri, stand: camera.stand, switches: switches.values } satisfies Kept)
}

// What comes in.

window.addEventListener('message', ({ data }: MessageEvent<unknown>) => {
  const message = readToView(data)
  if (message) receive(message)
})

function receive(message: ToView): void {
  switch (message.kind) {
    case 'scene':
      uri = message.uri
      version = message.version
      if (message.scene) show(message.scene)
      stage.classList.toggle('stale', !message.scene)
      reason.textContent = message.scene ? '' : message.reason
      stage.dataset.version = String(version)
      stage.dataset.drawable = String(message.scene !== null)
      keep()
      break
    case 'bands':
      bands = message.bands ?? undefined
      strip.show(bands)
      break
    case 'cursor':
      if (message.version !== version) return
      cursorMarks = marksAt(message.line, message.character)
      break
    case 'solid':
      zoneSolid = message.solid ? { n: message.n, solid: message.solid } : undefined
      if (!message.solid)
        hint.textContent = `The ${message.n}th zone of this lattice has too many pieces to be drawn.`
      fitCamera()
      fillSolids()
      break
    case 'save':
      save(message.what, message.scale)
      break
  }
  redraw()
}

function show(next: Scene): void {
  const isFirst = !scene
  const dimensionChanged = scene && scene.dimension !== next.dimension
  scene = next
  ink = new Ink(next)
  if (next.dimension < 3) camera.stands(...next.home)
  else if (dimensionChanged || (isFirst && !kept.stand)) camera.stands(...next.home)
  fitCamera()
  zoneSolid = undefined
  if (zoneAsked() !== undefined) say({ kind: 'solid', n: zoneAsked()! })
  waiting = waiting.filter(label => next.points.some(point => point.label === label))
  words.textContent = next.words.join(' ')
  switches.enable({
    wedge: next.wedge !== undefined,
    mesh: next.meshes.length > 0,
    path: next.segments.length > 0,
    write: true,
  })
  Object.assign(stage.dataset, {
    title: next.title,
    solid: next.zone.solid,
    faces: String(next.zone.faces.length),
    edges: String(next.zone.edges.length),
    vertices: String(next.zone.vertices.length),
    segments: String(next.segments.length),
    mesh: String(next.meshes[0]?.weights.length ?? 0),
    dimension: String(next.dimension),
  })
  fillSolids()
  fillNames()
}

/** The point, segment or vector whose text the cursor is in. */
function marksAt(line: number, character: number): Marks {
  if (!scene) return {}
  const isIn = (range: TextRange | undefined | null) =>
    range !== undefined &&
    range !== null &&
    (line > range.start.line || (line === range.start.line && character >= range.start.character)) &&
    (line < range.end.line || (line === range.end.line && character <= range.end.character))
  const point = scene.points.find(each => isIn(each.range) || each.mentions.some(isIn))
  if (point) return { point: point.label }
  const segment = scene.segments.findIndex(({ range }) => isIn(range))
  if (segment >= 0) return { segment }
  const vector = scene.vectorRanges.findIndex(isIn)
  return vector >= 0 ? { vector } : {}
}

// What is drawn.

/** In the plane the zone has no faces: it is one. */
function filled(solid: SceneSolid): SceneSolid {
  if (solid.faces.length > 0 || solid.vertices.length < 3) return solid
  const corners = solid.vertices.map((_, i) => i)
  const middle = solid.vertices.reduce<Triple>((m, v) => along(m, v, 1 / 2), solid.vertices[0])
  const bearing = (i: number) =>
    Math.atan2(solid.vertices[i][1] - middle[1], solid.vertices[i][0] - middle[0])
  return { ...solid, faces: [corners.sort((i, j) => bearing(i) - bearing(j))] }
}

const zoneAsked = (): number | undefined => {
  const [, n] = /^zone-(\d)$/.exec(switches.values.around) ?? []
  return n ? Number(n) : undefined
}

function fillSolids(): void {
  if (!solids || !scene) return
  const { zone, neighbours, dimension } = scene
  const { values } = switches
  const around = values.around
  const contrast = theme.isHighContrast ? 1.5 : 1
  const isFlat = dimension < 3
  const inward = zoneAsked() ? 0.5 : 1
  solids.setSolid('zone', filled(zone), {
    colour: theme.face,
    shadow: theme.ink,
    opacity: (isFlat ? 0.14 : 0.1) * contrast * inward,
  })
  solids.remove('wedge')
  if (values.wedge === 'on' && scene.wedge)
    solids.setSolid('wedge', filled(scene.wedge), { colour: theme.wedge, shadow: theme.ink, opacity: 0.22 })
  for (const name of ['near', 'far', 'dots', 'nth']) solids.remove(name)
  const [first, second] = [neighbours.first, neighbours.second]
  const shells = around === 'shell-1' ? 1 : around === 'shell-2' ? 2 : 0
  if (shells >= 1) {
    solids.setSolid(
      'near/faces',
      filled(zone),
      { colour: theme.face, shadow: theme.ink, opacity: 0.028 },
      first,
    )
    solids.setEdges('near/edges', zone, { colour: theme.ink, opacity: 0.34 }, first)
  }
  if (shells === 2) solids.setEdges('far/edges', zone, { colour: theme.ink, opacity: 0.16 }, second)
  if (around === 'lattice') {
    const sites = [[0, 0, 0] as Triple, ...first, ...second]
    solids.setDots(
      'dots',
      sites.flat(),
      sites.map(() => 3.4),
      { colour: theme.ink, opacity: 0.85 },
      devicePixelRatio,
    )
  }
  if (zoneSolid) {
    solids.setSolid('nth/faces', filled(zoneSolid.solid), {
      colour: theme.face,
      shadow: theme.paper,
      opacity: 0.6,
      solid: true,
    })
    solids.setEdges('nth/edges', zoneSolid.solid, { colour: theme.ink, opacity: 0.7, solid: true })
  }
  solids.remove('mesh')
  const [mesh] = scene.meshes
  if (values.mesh === 'on' && mesh)
    solids.setDots(
      'mesh',
      mesh.points,
      dotRadii(mesh),
      { colour: theme.mesh, opacity: 0.95 },
      devicePixelRatio,
    )
  const farthest = [...first, ...second].reduce((most, v) => Math.max(most, Math.hypot(...v)), 0)
  solids.reach = 1.2 * (farthest + camera.radius)
  Object.assign(stage.dataset, { around, shown: switches.summary })
}

interface Name {
  readonly key: string
  readonly element: HTMLElement
  readonly dot?: HTMLButtonElement
  readonly k: Triple
  readonly point?: ScenePoint
  readonly rank: number
  width: number
  height: number
}
let shownNames: Name[] = []

const isShown = (point: ScenePoint): boolean =>
  switches.values.points === 'on' ||
  switches.values.write === 'on' ||
  point.named ||
  !scene!.points.some(({ named }) => named)

function fillNames(): void {
  if (!scene) return
  const focused = (document.activeElement as HTMLElement | null)?.dataset.label
  names.replaceChildren()
  const make = (name: { base: string; sub: string }, kind: string): HTMLElement => {
    const label = document.createElement('span')
    label.className = `name ${kind}`
    label.append(name.base)
    if (name.sub) {
      const sub = document.createElement('sub')
      sub.textContent = name.sub
      label.append(sub)
    }
    label.setAttribute('aria-hidden', 'true')
    return label
  }
  const points = scene.points.filter(isShown).map((point): Name => {
    const dotButton = document.createElement('button')
    dotButton.className = `dot ${point.origin} ${point.severity ?? ''} ${point.named ? 'named' : 'spare'}`
    dotButton.dataset.label = point.label
    dotButton.setAttribute(
      'aria-label',
      `${point.label}: ${point.facts.map(([name, value]) => `${name} ${value}`).join('; ')}`,
    )
    dotButton.addEventListener('pointerenter', () => hover(point.label))
    dotButton.addEventListener('pointerleave', () => hover(undefined))
    dotButton.addEventListener('focus', () => hover(point.label))
    dotButton.addEventListener('blur', () => hover(undefined))
    dotButton.addEventListener('click', () => pick(point))
    const label = make(point.name, `point ${point.severity ?? ''} ${point.named ? 'named' : 'spare'}`)
    label.dataset.label = point.label
    return {
      key: point.label,
      element: label,
      dot: dotButton,
      k: point.k,
      point,
      rank: point.named ? (point.label === 'Γ' ? 3 : 2) : 1,
      width: 0,
      height: 0,
    }
  })
  const vectors = scene.reciprocal.map((k, i): Name => {
    const label = make({ base: 'b', sub: String(i + 1) }, 'vector')
    return { key: `vector ${i}`, element: label, k, rank: 2.5, width: 0, height: 0 }
  })
  const orders = pieceStarts(scene.segments).map(({ label, piece }): Name => {
    const mark = make({ base: String(piece), sub: '' }, 'order')
    mark.title = `Piece ${piece} of the path begins here`
    return {
      key: `piece ${piece}`,
      element: mark,
      k: scene!.points.find(point => point.label === label)?.k ?? [0, 0, 0],
      rank: 0.5,
      width: 0,
      height: 0,
    }
  })
  shownNames = [...points, ...vectors, ...(switches.values.path === 'on' ? orders : [])]
  names.append(...points.map(({ dot }) => dot!), ...shownNames.map(name => name.element))
  for (const name of shownNames)
    [name.width, name.height] = [name.element.offsetWidth, name.element.offsetHeight]
  if (focused !== undefined) points.find(({ key }) => key === focused)?.dot?.focus()
}

function redraw(): void {
  if (isPending) return
  isPending = true
  requestAnimationFrame(() => {
    isPending = false
    frame()
  })
}

function frame(): void {
  if (!scene || !ink) return
  const started = performance.now()
  fitToStage()
  camera.update()
  marks = { ...cursorMarks, ...(hovered !== undefined ? { point: hovered } : {}), spot }
  solids?.draw(camera)
  g.setTransform(devicePixelRatio, 0, 0, devicePixelRatio, 0, 0)
  g.clearRect(0, 0, camera.width, camera.height)
  drawInk(g)
  placeNames()
  stage.dataset.mark =
    marks.point ??
    (marks.segment !== undefined
      ? segmentName(marks.segment)
      : marks.vector !== undefined
        ? `b${marks.vector + 1}`
        : '')
  stage.dataset.view = `${camera.stand.theta.toFixed(1)},${camera.stand.phi.toFixed(1)}`
  drawnFrames++
  stage.dataset.frames = String(drawnFrames)
  stage.dataset.frameTime = (performance.now() - started).toFixed(2)
  if (drawnFrames === 1) {
    stage.dataset.firstPicture = performance.now().toFixed(0)
    // The picture comes first: what is not needed for it is made after it.
    setTimeout(startGlass)
  }
}

const segmentName = (i: number): string =>
  `${scene!.segments[i]?.from.label} – ${scene!.segments[i]?.to.label}`

function drawInk(target: CanvasRenderingContext2D): void {
  ink!.draw(
    target,
    camera,
    theme,
    { path: switches.values.path === 'on', wedge: switches.values.wedge === 'on' },
    marks,
  )
  triad(target, camera, theme, fontFamily(), scene!.dimension)
}

const fontFamily = (): string => getComputedStyle(document.body).fontFamily

/** WebGL takes a moment to wake up. Without it, lines and labels are drawn all the same. */
function startGlass(): void {
  if (solids) return
  try {
    solids = new Solids(glass)
    solids.resize(camera.width, camera.height, devicePixelRatio)
    stage.dataset.glass = 'on'
  } catch {
    stage.dataset.glass = 'off'
  }
  fillSolids()
  redraw()
}

function fitToStage(): void {
  const { clientWidth: width, clientHeight: height } = stage
  const [w, h] = [Math.round(width * devicePixelRatio), Math.round(height * devicePixelRatio)]
  if (camera.width === width && camera.height === height && paper.width === w && paper.height === h) return
  camera.width = width
  camera.height = height
  paper.width = w
  paper.height = h
  solids?.resize(width, height, devicePixelRatio)
}

function linesOnScreen(): (readonly [[number, number], [number, number]])[] {
  const line = (u: Triple, v: Triple) => [camera.project(u), camera.project(v)] as const
  return [
    ...scene!.zone.edges.map(([i, j]) => line(scene!.zone.vertices[i], scene!.zone.vertices[j])),
    ...(switches.values.path === 'on' ? scene!.segments.map(({ from, to }) => line(from.k, to.k)) : []),
    ...scene!.reciprocal.map(b => line([0, 0, 0], b)),
  ]
}

function wantedNames(): Wanted[] {
  return shownNames.map(({ key, k, width, height, rank, point }) => {
    const isBehind = point !== undefined && ink!.isBehind(camera, k)
    const isMarked = marks.point === key
    return {
      key,
      at: camera.project(k),
      width,
      height,
      rank: rank + (isMarked ? 10 : 0) - (isBehind ? 0.2 : 0),
      optional: !point?.named && !isMarked,
    }
  })
}

function placeNames(): void {
  const wanted = wantedNames()
  const placed = layout.place(wanted, linesOnScreen(), camera.project([0, 0, 0]), [
    camera.width,
    camera.height,
  ])
  shownNames.forEach(({ key, element: label, dot: button, k, point }, i) => {
    const place = placed.get(key)
    label.style.visibility = place ? 'visible' : 'hidden'
    if (place) label.style.transform = `translate(${place.x.toFixed(1)}px,${place.y.toFixed(1)}px)`
    const isMarked = marks.point === key
    label.classList.toggle('marked', isMarked || key === `vector ${marks.vector}`)
    if (!button) return
    const [x, y] = wanted[i].at
    button.style.transform = `translate(${x.toFixed(1)}px,${y.toFixed(1)}px)`
    button.classList.toggle('marked', isMarked)
    button.classList.toggle('waiting', waiting.includes(key))
    const behind = point !== undefined && camera.depth(k) < -0.2 * camera.radius
    label.classList.toggle('behind', behind)
    button.classList.toggle('behind', behind)
  })
}

// What a person does.

function hover(label: string | undefined): void {
  if (hovered === label) return
  hovered = label
  const point = scene?.points.find(each => each.label === label)
  card.hidden = !point
  if (point) {
    card.replaceChildren()
    const head = document.createElement('strong')
    head.append(point.name.base)
    if (point.name.sub) {
      const sub = document.createElement('sub')
      sub.textContent = point.name.sub
      head.append(sub)
    }
    const list = document.createElement('dl')
    for (const [name, value] of point.facts) {
      const [term, fact] = [document.createElement('dt'), document.createElement('dd')]
      term.textContent = name
      fact.textContent = value
      list.append(term, fact)
    }
    card.append(head, list)
    const [x, y] = camera.project(point.k)
    const { offsetWidth: width, offsetHeight: height } = card
    const isNarrow = camera.width < NARROW
    const isLeft = x < camera.width / 2
    const left = isNarrow ? 4 : isLeft ? Math.min(x + 18, camera.width - width - 4) : x - 18 - width
    card.style.left = `${Math.max(4, left)}px`
    // Where there is no room beside the point, the facts stand at the far end.
    const top = isNarrow ? (y < camera.height / 2 ? camera.height : 0) : y + 14
    card.style.top = `${Math.max(4, Math.min(top, camera.height - height - 4))}px`
  }
  redraw()
}

function pick(point: ScenePoint): void {
  if (switches.values.write === 'on') write(point.label)
  else if (point.range) say({ kind: 'reveal', version, range: point.range })
}

/** Points picked one after the other become the path's text; the first of a new piece waits for its second. */
function write(label: string): void {
  const last = scene?.segments.at(-1)
  const begins = beginsPiece || !last
  if (waiting.at(-1) === label || (!begins && last?.to.label === label)) return
  if (begins) {
    waiting.push(label)
    if (waiting.length > 1) {
      say({ kind: 'append', version, labels: waiting, newPiece: last !== undefined })
      waiting = []
      beginsPiece = false
    }
  } else say({ kind: 'append', version, labels: [label], newPiece: false })
  tellWriting()
  redraw()
}

function newPiece(): void {
  beginsPiece = true
  waiting = []
  tellWriting()
  redraw()
}

function tellWriting(): void {
  const isWriting = switches.values.write === 'on'
  stage.classList.toggle('writing', isWriting)
  element('break').hidden = !isWriting
  if (!isWriting) hint.textContent = ''
  else if (waiting.length > 0) hint.textContent = `${waiting[0]} begins a piece: pick its next point.`
  else if (beginsPiece) hint.textContent = 'Pick the first point of the new piece.'
  else hint.textContent = 'Each point you pick is written at the end of path.'
}

function changed(name: string, value: string): void {
  switch (name) {
    case 'look':
      look(value)
      break
    case 'save':
      if (value === 'png-2' || value === 'png-4') save('png', Number(value.at(-1)))
      else save(value as 'zone' | 'bands', 1)
      break
    case 'perspective':
      camera.stand.perspective = value === 'on'
      break
    case 'write':
      waiting = []
      beginsPiece = false
      tellWriting()
      fillNames()
      break
    case 'bands':
      document.body.classList.toggle('with-bands', value === 'on')
      requestAnimationFrame(() => strip.draw())
      break
    case 'around': {
      const n = zoneAsked()
      zoneSolid = undefined
      if (n !== undefined) say({ kind: 'solid', n })
      camera.stand.pan = [0, 0]
      camera.stand.zoom = 1
      fitCamera()
      break
    }
    default:
      fillNames()
  }
  fillSolids()
  keep()
  redraw()
}

function look(value: string): void {
  if (!scene) return
  camera.stand.pan = [0, 0]
  camera.stand.zoom = 1
  turnTo(value)
  fitCamera()
}

/** All that is asked for is in sight; of a second shell the zones' middles are. */
function fitCamera(): void {
  if (!scene) return
  const { around } = switches.values
  const { first, second } = scene.neighbours
  const more =
    around === 'lattice' || around === 'shell-2'
      ? [...first, ...second]
      : around === 'shell-1'
        ? first
        : (zoneSolid?.solid.vertices ?? [])
  camera.fit([...extentOf(scene), ...more])
}

function turnTo(value: string): void {
  if (!scene || scene.dimension < 3) return
  const axis = { 'a*': 0, 'b*': 1, 'c*': 2 }[value]
  if (value === 'start') camera.stands(...scene.home)
  else if (value === 'x') camera.lookAlong([1, 0, 0])
  else if (value === 'z') camera.lookAlong([0, 0, 1])
  else if (value === 'facet' && ink) {
    // The wall that faces the eye most nearly.
    const towards = ink.walls.map(({ normal }) => dot(normal, camera.eye))
    camera.lookAlong(ink.walls[towards.indexOf(Math.max(...towards))].normal)
  } else if (axis !== undefined && scene.axes[axis]) camera.lookAlong(scene.axes[axis])
}

function save(what: 'zone' | 'bands' | 'png', scale: number): void {
  if (!scene) return
  if (what !== 'png') {
    say({ kind: 'figure', what, view: [camera.stand.theta, camera.stand.phi] })
    return
  }
  const picture = picturePng(scale === 4 ? 4 : 2)
  if (picture) say({ kind: 'png', data: picture, scale: scale === 4 ? 4 : 2 })
}

/** The stage as it stands, at a multiple of its size on the screen. */
function picturePng(scale: 2 | 4): string | undefined {
  const { width, height } = camera
  const canvas = document.createElement('canvas')
  canvas.width = width * scale
  canvas.height = height * scale
  const picture = canvas.getContext('2d')
  if (!picture) return undefined
  picture.fillStyle = theme.paper
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
  for (const { element: label, dot: button, k } of shownNames) {
    const style = getComputedStyle(label)
    if (button) {
      const [x, y] = camera.project(k)
      picture.fillStyle = style.color
      picture.beginPath()
      picture.arc(x, y, 3.4, 0, 2 * Math.PI)
      picture.fill()
    }
    if (style.visibility === 'hidden') continue
    const box = label.getBoundingClientRect()
    if (label.classList.contains('order')) {
      picture.fillStyle = style.backgroundColor
      picture.beginPath()
      picture.roundRect(box.left - origin.left, box.top - origin.top, box.width, box.height, box.height / 2)
      picture.fill()
    }
    const sub = label.querySelector('sub')
    picture.textAlign = 'left'
    picture.textBaseline = 'alphabetic'
    picture.fillStyle = style.color
    picture.font = `${style.fontStyle} ${style.fontWeight} ${style.fontSize} ${style.fontFamily}`
    const [x, y] = [
      box.left - origin.left + Number.parseFloat(style.paddingLeft),
      box.top - origin.top + 0.76 * box.height,
    ]
    const base = label.firstChild?.textContent ?? ''
    picture.fillText(base, x, y)
    if (!sub) continue
    const offset = picture.measureText(base).width
    picture.font = `${style.fontWeight} ${getComputedStyle(sub).fontSize} ${style.fontFamily}`
    picture.fillText(sub.textContent ?? '', x + offset, y + 3.5)
  }
  return canvas.toDataURL('image/png').split(',')[1]
}

// Mouse, touch, keyboard.

const fingers = new Map<number, { x: number; y: number }>()

stage.addEventListener('pointerdown', event => {
  if ((event.target as HTMLElement).closest('button')) return
  stage.setPointerCapture(event.pointerId)
  fingers.set(event.pointerId, { x: event.clientX, y: event.clientY })
  stage.focus({ preventScroll: true })
})
for (const name of ['pointerup', 'pointercancel'] as const)
  stage.addEventListener(name, event => {
    if (!fingers.delete(event.pointerId)) return
    if (fingers.size === 0) keep()
  })
stage.addEventListener('pointermove', event => {
  const last = fingers.get(event.pointerId)
  if (!last) return followPath(event)
  const [dx, dy] = [event.clientX - last.x, event.clientY - last.y]
  const other = [...fingers].find(([id]) => id !== event.pointerId)?.[1]
  if (other) {
    const spread = (p: { x: number; y: number }) => Math.hypot(p.x - other.x, p.y - other.y)
    const now = { x: event.clientX, y: event.clientY }
    camera.zoomBy(spread(now) / Math.max(1, spread(last)))
    camera.panBy(dx / 2, dy / 2)
  } else if (event.shiftKey || event.buttons & 6 || scene?.dimension !== 3) camera.panBy(dx, dy)
  else camera.turn(dx * DEGREES_PER_PX, dy * DEGREES_PER_PX)
  fingers.set(event.pointerId, { x: event.clientX, y: event.clientY })
  hover(undefined)
  redraw()
})
stage.addEventListener('pointerleave', () => {
  strip.markAt(undefined)
  spot = undefined
  redraw()
})
stage.addEventListener('contextmenu', event => event.preventDefault())
stage.addEventListener(
  'wheel',
  event => {
    event.preventDefault()
    const box = stage.getBoundingClientRect()
    camera.zoomBy(1.0015 ** -event.deltaY, [event.clientX - box.left, event.clientY - box.top])
    redraw()
    keep()
  },
  { passive: false },
)
stage.addEventListener('dblclick', event => {
  if ((event.target as HTMLElement).closest('button')) return
  look('start')
  redraw()
  keep()
})
stage.addEventListener('keydown', event => {
  const { key, shiftKey } = event
  const [x, y] = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, -1], ArrowDown: [0, 1] }[key] ?? [
    0, 0,
  ]
  if (x || y) {
    if (shiftKey || scene?.dimension !== 3) camera.panBy(20 * x, 20 * y)
    else camera.turn(TURN_BY_KEY * x, TURN_BY_KEY * y)
  } else if (key === '+' || key === '=') camera.zoomBy(1.15)
  else if (key === '-') camera.zoomBy(1 / 1.15)
  else if (key === '0') look('start')
  else if (key === '|' && switches.values.write === 'on') newPiece()
  else if (key === 'Escape' && switches.values.write === 'on') switches.set('write', 'off')
  else return
  event.preventDefault()
  redraw()
  keep()
})

/** A pointer on the path in the zone moves the marker in the strip. */
function followPath(event: PointerEvent): void {
  if (!scene || !bands || switches.values.path !== 'on') return
  const box = stage.getBoundingClientRect()
  const [x, y] = [event.clientX - box.left, event.clientY - box.top]
  const best = bands.segments
    .map(segment => {
      const line = [camera.project(segment.from.k), camera.project(segment.to.k)] as const
      return { segment, t: nearestOn(line, x, y), away: distanceTo(line, x, y) }
    })
    .filter(({ away }) => away < NEAR)
    .sort((a, b) => a.away - b.away)[0]
  const before = spot
  spot = best && along(best.segment.from.k, best.segment.to.k, best.t)
  strip.markAt(best && best.segment.start + best.t * best.segment.length)
  if (spot || before) redraw()
}

element('break').addEventListener('click', newPiece)
new ResizeObserver(() => {
  redraw()
  strip.draw()
}).observe(document.body)
onThemeChange(() => {
  theme = readTheme()
  fillSolids()
  fillNames()
  redraw()
})
document.body.classList.toggle('with-bands', switches.values.bands === 'on')
tellWriting()
switches.offerZones(LAST_SHELL_ZONE)
say({ kind: 'ready' })
