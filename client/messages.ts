/** What the zone view and its host say to each other. Both sides import this file and doubt what arrives. */
import type { Bands, Scene, SceneSolid, TextRange } from '../server/src/protocol.ts'

export type FigureKind = 'zone' | 'bands'
/** Degrees from z, and about z from x: where the eye stands. */
export type Direction = readonly [theta: number, phi: number]

export type FromView =
  | { readonly kind: 'ready' }
  | { readonly kind: 'reveal'; readonly version: number; readonly range: TextRange }
  | {
      readonly kind: 'append'
      readonly version: number
      readonly labels: readonly string[]
      readonly newPiece: boolean
    }
  | { readonly kind: 'solid'; readonly n: number }
  | { readonly kind: 'figure'; readonly what: FigureKind; readonly view: Direction }
  | { readonly kind: 'png'; readonly data: string; readonly scale: number }

export type ToView =
  | {
      readonly kind: 'scene'
      readonly uri: string
      readonly version: number
      readonly scene: Scene | null
      readonly reason: string
    }
  | { readonly kind: 'bands'; readonly version: number; readonly bands: Bands | null }
  | { readonly kind: 'cursor'; readonly version: number; readonly line: number; readonly character: number }
  | { readonly kind: 'solid'; readonly n: number; readonly solid: SceneSolid | null }
  | { readonly kind: 'save'; readonly what: FigureKind | 'png'; readonly scale: number }

/** A label is 32 characters at most; nobody picks more points than this at once. */
const LONGEST_LABEL = 32
const MOST_LABELS = 16
/** Of a picture as base64: four times a large screen, and some. */
const LARGEST_PICTURE = 100_000_000
export const FIRST_SHELL_ZONE = 2
export const LAST_SHELL_ZONE = 8

/** Messages as JSON that no mark of HTML stands in: the page of the view begins with them. */
export const embedded = (messages: readonly ToView[]): string =>
  JSON.stringify(messages).replaceAll('<', '\\u003c')

type Fields = Readonly<Record<string, unknown>>

const isRecord = (data: unknown): data is Fields =>
  typeof data === 'object' && data !== null && !Array.isArray(data)
const isWhole = (x: unknown, least = 0): x is number => Number.isSafeInteger(x) && (x as number) >= least
const isNumber = (x: unknown): x is number => typeof x === 'number' && Number.isFinite(x)
const isText = (x: unknown): x is string => typeof x === 'string'
const isList = <T>(x: unknown, isItem: (item: unknown) => item is T): x is T[] =>
  Array.isArray(x) && x.every(isItem)
const isTriple = (x: unknown): x is [number, number, number] => isList(x, isNumber) && x.length === 3

const isPosition = (x: unknown): x is TextRange['start'] =>
  isRecord(x) && isWhole(x.line) && isWhole(x.character)
const isRange = (x: unknown): x is TextRange => isRecord(x) && isPosition(x.start) && isPosition(x.end)

/** Anything that is none of ours is undefined, never an exception. */
export function readFromView(data: unknown): FromView | undefined {
  if (!isRecord(data)) return undefined
  const { kind, version, range, labels, newPiece, n, what, view, scale, data: picture } = data
  switch (kind) {
    case 'ready':
      return { kind }
    case 'reveal':
      return isWhole(version) && isRange(range) ? { kind, version, range } : undefined
    case 'append': {
      const isLabel = (x: unknown): x is string => isText(x) && x.length > 0 && x.length <= LONGEST_LABEL
      return isWhole(version) &&
        isList(labels, isLabel) &&
        labels.length > 0 &&
        labels.length <= MOST_LABELS &&
        typeof newPiece === 'boolean'
        ? { kind, version, labels, newPiece }
        : undefined
    }
    case 'solid':
      return isWhole(n, FIRST_SHELL_ZONE) && n <= LAST_SHELL_ZONE ? { kind, n } : undefined
    case 'figure':
      return (what === 'zone' || what === 'bands') && isList(view, isNumber) && view.length === 2
        ? { kind, what, view: [view[0], view[1]] }
        : undefined
    case 'png':
      return isText(picture) &&
        picture.length <= LARGEST_PICTURE &&
        /^[A-Za-z0-9+/]+={0,2}$/.test(picture) &&
        (scale === 2 || scale === 4)
        ? { kind, data: picture, scale }
        : undefined
    default:
      return undefined
  }
}

/** Anything that is none of ours is undefined, never an exception. */
export function readToView(data: unknown): ToView | undefined {
  if (!isRecord(data)) return undefined
  const { kind, uri, version, scene, reason, bands, line, character, n, solid, what, scale } = data
  switch (kind) {
    case 'scene':
      return isText(uri) && isWhole(version) && (scene === null || isScene(scene)) && isText(reason)
        ? { kind, uri, version, scene, reason }
        : undefined
    case 'bands':
      return isWhole(version) && (bands === null || isBands(bands)) ? { kind, version, bands } : undefined
    case 'cursor':
      return isWhole(version) && isWhole(line) && isWhole(character)
        ? { kind, version, line, character }
        : undefined
    case 'solid':
      return isWhole(n) && (solid === null || isSolid(solid)) ? { kind, n, solid } : undefined
    case 'save':
      return (what === 'zone' || what === 'bands' || what === 'png') && isNumber(scale)
        ? { kind, what, scale }
        : undefined
    default:
      return undefined
  }
}

function isSolid(x: unknown): x is SceneSolid {
  if (!isRecord(x) || !isList(x.vertices, isTriple)) return false
  const { length } = x.vertices
  const isIndex = (i: unknown): i is number => isWhole(i) && i < length
  const areIndices = (list: unknown): list is number[] => isList(list, isIndex)
  return isList(x.edges, areIndices) && isList(x.faces, areIndices)
}

const isName = (x: unknown): x is { base: string; sub: string } =>
  isRecord(x) && isText(x.base) && isText(x.sub)
const isEnd = (x: unknown): x is { label: string; k: [number, number, number] } =>
  isRecord(x) && isText(x.label) && isTriple(x.k)
const isMaybe = (x: unknown, is: (x: unknown) => boolean): boolean => x === undefined || is(x)

function isScene(x: unknown): x is Scene {
  const isPoint = (p: unknown): p is Scene['points'][number] =>
    isRecord(p) &&
    isText(p.label) &&
    isName(p.name) &&
    isTriple(p.k) &&
    isMaybe(p.folded, isTriple) &&
    isMaybe(p.range, isRange) &&
    isList(p.mentions, isRange) &&
    isList(p.facts, (fact): fact is string[] => isList(fact, isText) && fact.length === 2)
  const isSegment = (s: unknown): s is Scene['segments'][number] =>
    isRecord(s) && isWhole(s.piece) && isEnd(s.from) && isEnd(s.to) && isMaybe(s.range, isRange)
  const isMesh = (m: unknown): m is Scene['meshes'][number] =>
    isRecord(m) && isList(m.points, isNumber) && isList(m.weights, isNumber) && isMaybe(m.name, isText)
  return (
    isRecord(x) &&
    isText(x.title) &&
    isText(x.unit) &&
    (x.dimension === 1 || x.dimension === 2 || x.dimension === 3) &&
    isSolid(x.zone) &&
    isText((x.zone as unknown as Fields).solid) &&
    isNumber((x.zone as unknown as Fields).circumradius) &&
    isList(x.reciprocal, isTriple) &&
    isList(x.axes, isTriple) &&
    Array.isArray(x.vectorRanges) &&
    x.vectorRanges.every(range => range === null || isRange(range)) &&
    isList(x.points, isPoint) &&
    isList(x.segments, isSegment) &&
    isMaybe(x.wedge, isSolid) &&
    isList(x.meshes, isMesh) &&
    isRecord(x.neighbours) &&
    isList(x.neighbours.first, isTriple) &&
    isList(x.neighbours.second, isTriple) &&
    isList(x.home, isNumber) &&
    x.home.length === 2 &&
    isList(x.words, isText)
  )
}

function isBands(x: unknown): x is Bands {
  const isBranch = (b: unknown): b is number[] => isList(b, isNumber) && b.length === 4
  const isTick = (t: unknown): t is Bands['ticks'][number] =>
    isRecord(t) && isNumber(t.distance) && isList(t.names, isName)
  const isSegment = (s: unknown): s is Bands['segments'][number] =>
    isRecord(s) &&
    isEnd(s.from) &&
    isEnd(s.to) &&
    isNumber(s.start) &&
    isNumber(s.length) &&
    isList(s.branches, isBranch)
  return (
    isRecord(x) &&
    isNumber(x.length) &&
    isNumber(x.top) &&
    isList(x.ticks, isTick) &&
    isList(x.segments, isSegment)
  )
}
