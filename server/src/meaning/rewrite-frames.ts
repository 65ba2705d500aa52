/** The same points and atoms by other axes. Exact numbers stay exact where the way from frame to frame is rational. */
import { combine, inverse, type Mat3, multiply } from '../crystal/vector.ts'
import { insertKeys, replaceValue, replaceVector, standsHere } from '../format/edits.ts'
import type {
  AtomFrame,
  Fraction,
  LatticeDocument,
  NumberValue,
  PointEntry,
  PointFrame,
  TextEdit,
  VectorValue,
} from '../format/model.ts'
import { formatFraction, formatNumber, recogniseFraction } from '../format/numbers.ts'
import { sumOf, writeSum } from './combinations.ts'
import type { Crystal } from './crystal.ts'

/** What arithmetic leaves between two equal numbers of the size of one, and ten written digits of a length. */
const SAME = 1e-9
const DIGITS = 10

/**
 * All points of the file in another frame.
 * @returns undefined where a number cannot be read or edited, or the frame cannot be used.
 */
export function pointsInFrame(crystal: Crystal, text: string, frame: PointFrame): TextEdit[] | undefined {
  const vectors = (crystal.document.points?.items ?? []).flatMap(({ coordinates }) => coordinates ?? [])
  const edits = converted(text, vectors, crystal.pointAxes, crystal.axesOfFrame(frame), kindOf(frame))
  return edits && [...edits, ...frameEdits(text, crystal.document, 'points', frame)]
}

/** One point whose numbers were meant in another frame, in the file's own. Its place changes. */
export function pointReadIn(
  crystal: Crystal,
  text: string,
  { coordinates }: PointEntry,
  meant: PointFrame,
): TextEdit[] | undefined {
  const kind = kindOf(crystal.document.frames.points)
  return coordinates && converted(text, [coordinates], crystal.axesOfFrame(meant), crystal.pointAxes, kind)
}

/** All atoms in another frame. */
export function atomsInFrame(crystal: Crystal, text: string, frame: AtomFrame): TextEdit[] | undefined {
  if (!crystal.lattice || !crystal.atomsComplete) return undefined
  const vectors = crystal.atoms.map(({ entry }) => entry.position!)
  const edits = converted(text, vectors, crystal.atomAxes, crystal.atomAxesOf(frame), kindOf(frame))
  return edits && [...edits, ...frameEdits(text, crystal.document, 'atoms', frame)]
}

function frameEdits(
  text: string,
  document: LatticeDocument,
  name: 'atoms' | 'points',
  frame: AtomFrame | PointFrame,
): TextEdit[] {
  const { framesEntry } = document
  const stated = framesEntry?.[name]
  if (stated) return [replaceValue(text, stated, frame)]
  if (framesEntry) return insertKeys(text, framesEntry, [[name, frame]])
  return insertKeys(text, document, [['frames', `{${name}: ${frame}}`]])
}

type Kind = 'fraction' | 'length'
const kindOf = (frame: AtomFrame | PointFrame): Kind => (frame === 'cartesian' ? 'length' : 'fraction')

/** Numbers x along the rows of `from` become x · from · to⁻¹ along those of `to`. */
function converted(
  text: string,
  vectors: readonly VectorValue[],
  from: Mat3 | undefined,
  to: Mat3 | undefined,
  kind: Kind,
): TextEdit[] | undefined {
  if (!from || !to) return undefined
  const change = multiply(from, inverse(to))
  const exact = change.map(row => row.map(x => recogniseFraction(x, SAME)))
  const isExact = exact.flat().every(Boolean)
  const edits: TextEdit[] = []
  for (const vector of vectors) {
    if (!standsHere(text, vector.at)) return undefined
    const items = vector.items as readonly NumberValue[]
    if (!items.every(item => item && standsHere(text, item.at))) return undefined
    const [x, y, z] = [0, 1, 2].map(i => items[i]?.value ?? 0)
    const values = combine([x, y, z], change)
    // A plane that does not lie in xy has a third component that is not written.
    if (values.slice(items.length).some(value => Math.abs(value) > SAME)) return undefined
    const numbers = items.map((_, j) =>
      isExact
        ? writeSum(
            sumOf(
              items,
              items.map((_, i) => exact[i][j] as Fraction),
            ),
            () => true,
            kind,
          )
        : numberText(values[j]),
    )
    edits.push(...replaceVector(text, vector, numbers))
  }
  return edits
}

/** A simple fraction where it is one. */
export function numberText(x: number): string {
  const exact = recogniseFraction(x, SAME)
  return exact ? formatFraction(exact) : formatNumber(x, DIGITS)
}
