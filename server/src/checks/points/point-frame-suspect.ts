import { BRAVAIS } from '../../crystal/bravais.ts'
import { insertKeys, replaceValue } from '../../format/edits.ts'
import type { Fix, TextEdit } from '../../format/model.ts'
import { displayLabel } from '../../format/path.ts'
import type { Check, Context, Finding } from '../check.ts'
import { type Diagnosis, type DiagnosedPoint, diagnose } from './diagnosis.ts'
import {
  convertNumbers,
  frameInWords,
  listLabels,
  offer,
  rewriteNumbers,
  statedPlace,
  writtenPlace,
} from './numbers.ts'
import type { Reading } from './readings.ts'
import { numbersOf } from './stated.ts'

interface Facts {
  /** The frame in which the labels fit. */
  readonly frame: string
  /** A centring that the lattice does not state and that the labels need. */
  readonly centring?: string
  readonly labels: readonly string[]
}

type Framed = Extract<Reading, { kind: 'frame' | 'centring' }>
const isFramed = (reading: Reading | undefined): reading is Framed =>
  reading?.kind === 'frame' || reading?.kind === 'centring'

/** What a finding about points of a centred lattice is about: a cell that is not primitive has the same cause. */
export const POINTS_OF_CENTRED_CELL = 'points of a centred cell'

export const pointFrameSuspect: Check<Facts> = {
  id: 'point-frame-suspect',
  severity: 'warning',
  needs: ['labels', 'frames.points'],
  summary: 'Coordinates do not fit their labels in the stated frame, but do in another one.',
  why: 'The same three numbers are another k-point in another frame: the bands are right, for the wrong points.',
  wrong:
    'lattice: {bravais: cF, a: 5.43}\nframes: {points: conventional}\npoints:\n  X: [1/2, 0, 1/2]\n  W: [1/2, 1/4, 3/4]\n',
  right:
    'lattice: {bravais: cF, a: 5.43}\nframes: {points: primitive}\npoints:\n  X: [1/2, 0, 1/2]\n  W: [1/2, 1/4, 3/4]\n',
  *run(context) {
    const diagnosis = diagnose(context.crystal)
    if (isFramed(diagnosis.whole)) {
      const finding = ofBlock(context, diagnosis, diagnosis.whole)
      if (finding) yield finding
      return
    }
    for (const item of diagnosis.points.values()) {
      const { cause } = item
      if (cause?.kind === 'reading' && isFramed(cause.reading)) yield ofPoint(context, item, cause.reading)
    }
  },
}

function ofBlock(context: Context, diagnosis: Diagnosis, reading: Framed): Finding<Facts> | undefined {
  const { document } = context
  const moved = [...diagnosis.points.values()].flatMap(item =>
    item.cause?.kind === 'reading' && !item.fit ? [{ item, meant: item.cause.fit.label }] : [],
  )
  const labels = moved.map(({ item }) => item.point.label)
  const facts: Facts = { frame: reading.frame, labels }
  const related = moved.map(({ item, meant }) => ({
    at: item.entry.coordinates!.at,
    message: `${displayLabel(meant)} in ${frameInWords(reading.frame)}`,
  }))
  if (reading.kind === 'centring') {
    if (isToldByLattice(context)) return undefined
    const { bravais } = reading.book
    return {
      at: document.points!.key,
      message: `${listLabels(labels)} fit the ${bravais ? BRAVAIS[bravais].words : reading.centring} lattice of these vectors, which needs \`centring: ${reading.centring}\`; without it the vectors are a primitive cell, and its zone is smaller.`,
      facts: { ...facts, centring: reading.centring },
      related,
      subject: POINTS_OF_CENTRED_CELL,
      fixes: stateCentring(context, reading),
    }
  }
  const names = moved.map(({ item, meant }) => (meant === item.point.label ? '' : displayLabel(meant)))
  const asWhat = names.some(name => name !== '') ? ` (as ${listLabels(moved.map(({ meant }) => meant))})` : ''
  return {
    at: document.framesEntry?.points?.at ?? document.points!.key,
    message: `${listLabels(labels)} ${labels.length > 1 ? 'do' : 'does'} not fit as ${frameInWords(document.frames.points)}, but ${labels.length > 1 ? 'do' : 'does'} as ${frameInWords(reading.frame)}${asWhat}.`,
    facts,
    related,
    fixes: [
      ...offer(`State \`points: ${reading.frame}\``, stateFrame(context, reading.frame)),
      ...offer(
        `Convert the numbers to ${frameInWords(document.frames.points)}`,
        convertNumbers(context, diagnosis, reading.axes),
      ),
    ],
  }
}

/** Vectors that contradict the type stated beside them have a finding of their own, with the same remedy. */
function isToldByLattice({ document, crystal }: Context): boolean {
  const stated = document.lattice?.bravais?.value
  return stated !== undefined && stated !== crystal.type?.bravais
}

function stateCentring(context: Context, { centring, frame }: Extract<Framed, { kind: 'centring' }>): Fix[] {
  const { text, document } = context
  const needsFrame = document.frames.points !== frame
  return offer(`State \`centring: ${centring}\`${needsFrame ? ` and \`points: ${frame}\`` : ''}`, [
    ...insertKeys(text, document.lattice!, [['centring', centring]]),
    ...(needsFrame ? stateFrame(context, frame) : []),
  ])
}

function stateFrame({ text, document }: Context, frame: string): TextEdit[] {
  const { framesEntry } = document
  if (framesEntry?.points) return [replaceValue(text, framesEntry.points, frame)]
  return framesEntry
    ? insertKeys(text, framesEntry, [['points', frame]])
    : insertKeys(text, document, [['frames', `{points: ${frame}}`]])
}

function ofPoint(
  { crystal, document, text }: Context,
  item: DiagnosedPoint,
  reading: Framed,
): Finding<Facts> {
  const { point, entry, cause } = item
  const { label } = point
  const fraction = cause?.kind === 'reading' ? cause.fit.fraction : point.fraction
  const right = statedPlace(crystal, fraction)
  return {
    at: entry.coordinates!.at,
    message: `${writtenPlace(text, entry)} is ${displayLabel(label)} as ${frameInWords(reading.frame)}; as ${frameInWords(document.frames.points)}, like the other points, it is ${right}.`,
    facts: { frame: reading.frame, labels: [label] },
    fixes: offer(`Replace by ${right}`, rewriteNumbers(text, entry, numbersOf(crystal, fraction))),
  }
}
