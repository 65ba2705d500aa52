/** The zone view inside its webview: takes finished geometry, draws it, and says what a person does with it. */
import { type FromView, LAST_SHELL_ZONE, readToView, type ToView } from '../messages.ts'
import type {
  Bands,
  Scene,
  SceneMesh,
  ScenePoint,
  SceneSolid,
  TextRange,
  Triple,
} from '../../server/src/protocol.ts'
import { along, Camera, dot, type Stand } from './camera.ts'
import { fillCard } from './card.ts'
import { element, Switches } from './controls.ts'
import { listen } from './gestures.ts'
import { extentOf, Ink, type Marks, triad } from './ink.ts'
import { distanceTo, LabelLayout, nearestOn, type Wanted } from './labels.ts'
import { type Name, namesOf, putInto } from './names.ts'
import { pictureOf } from './picture.ts'
import { dotRadii, filled } from './shapes.ts'
import { Solids } from './solids.ts'
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

window.addEventListener('message', ({ data }: MessageEvent<unknown>) => take(data))

function take(data: unknown): void {
  const message = readToView(data)
  if (message) receive(message)
}

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
  switches.offer(
    'which',
    next.meshes.map(({ name }, i) => name ?? `mesh ${i + 1}`),
  )
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

const zoneAsked = (): number | undefined => {
  const [, n] = /^zone-(\d)$/.exec(switches.values.around) ?? []
  return n ? Number(n) : undefined
}

const chosenMesh = (): SceneMesh | undefined => scene?.meshes[Number(switches.values.which)]

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
  const mesh = chosenMesh()
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
  Object.assign(stage.dataset, {
    around,
    shown: switches.summary,
    mesh: String(mesh?.weights.length ?? 0),
  })
}

let shownNames: Name[] = []

const isShown = (point: ScenePoint): boolean =>
  switches.values.points === 'on' ||
  switches.values.write === 'on' ||
  point.named ||
  !scene!.points.some(({ named }) => named)

function fillNames(): void {
  if (!scene) return
  shownNames = namesOf(scene, scene.points.filter(isShown), switches.values.path === 'on', { hover, pick })
  putInto(names, shownNames)
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
    setTimeout(() => void startGlass())
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
async function startGlass(): Promise<void> {
  if (solids) return
  try {
    solids = new Solids(glass, await import('./three.ts'))
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
  if (point) fillCard(card, point, camera)
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
  const picture = pictureOf(
    { stage, glass, camera, solids, names: shownNames, ground: theme.paper, drawInk },
    scale === 4 ? 4 : 2,
  )
  if (picture) say({ kind: 'png', data: picture, scale: scale === 4 ? 4 : 2 })
}

listen(stage, camera, {
  isFlat: () => scene?.dimension !== 3,
  moved: () => {
    hover(undefined)
    redraw()
  },
  rested: keep,
  home: () => {
    look('start')
    redraw()
    keep()
  },
  pointed: followPath,
  left: () => {
    strip.markAt(undefined)
    spot = undefined
    redraw()
  },
  pressed: key => {
    if (switches.values.write !== 'on' || (key !== '|' && key !== 'Escape')) return false
    if (key === '|') newPiece()
    else switches.set('write', 'off')
    return true
  },
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
// What the page brought with it is drawn at once; a message would come a little later.
for (const message of JSON.parse(element('head-start').textContent || '[]')) take(message)
say({ kind: 'ready' })
