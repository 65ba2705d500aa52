/** The atoms of a supercell: each of the file's, at every translation of the primitive lattice that the supercell holds. */
import { translationsIn, wholeInverse } from '../crystal/supercell.ts'
import { combine, type Mat3, type Vec3 } from '../crystal/vector.ts'
import { applyEdits, replaceVector } from '../format/edits.ts'
import { fraction } from '../format/fraction.ts'
import type { AtomEntry, Fraction, NumberValue, Span, TextEdit, VectorValue } from '../format/model.ts'
import { formatNumber } from '../format/numbers.ts'
import { lineBreak, lineStart } from '../format/text.ts'
import { plus, sumOf, wrapped, writeSum } from './combinations.ts'
import type { Crystal } from './crystal.ts'

/** A file of more atoms is not written by hand, nor read. */
export const MOST_COPIES = 5000

/** Digits after the point of a length, as wherever a document is restated. */
const DIGITS = 10

/**
 * The first copy of an atom stays on its line, with its comment; the others follow it.
 * @param matrix whole numbers, not singular; the supercell's vectors by the primitive ones.
 * @returns undefined where there would be too many, or an atom cannot be copied.
 */
export function atomCopies(crystal: Crystal, text: string, matrix: Mat3): TextEdit[] | undefined {
  const { document, atoms } = crystal
  const translations = translationsIn(matrix)
  if (!translations || translations.length * atoms.length > MOST_COPIES) return undefined
  const place = document.frames.atoms === 'cartesian' ? inSpace(crystal) : inFractions(crystal, matrix)
  if (!place) return undefined
  const isFlow = text[document.atoms!.at[0]] === '['
  const edits: TextEdit[] = []
  for (const { entry } of atoms) {
    const position = entry.position!
    // A copy of an anchor would be a second one of its name.
    if (text.slice(...entry.at).includes('&')) return undefined
    const [first, ...others] = translations.map(n => place(position, n))
    edits.push(...replaceVector(text, position, first))
    const items = others.map(numbers => itemWith(text, entry.at, position, numbers))
    edits.push(isFlow ? afterFlowItem(entry, items) : afterBlockItem(text, entry, items))
  }
  return edits.filter(edit => edit.at[1] > edit.at[0] || edit.text !== '')
}

/** The numbers of a copy; undefined keeps one as it is. */
type Place = (position: VectorValue, translation: Vec3) => (string | undefined)[]

const itemsOf = (vector: VectorValue): readonly NumberValue[] => vector.items as readonly NumberValue[]

/** Fractions x of the primitive vectors become (x + n) M⁻¹; conventional ones go through the primitive ones. */
function inFractions({ document, lattice }: Crystal, matrix: Mat3): Place | undefined {
  const { numerators, denominator } = wholeInverse(matrix)
  const over = (x: bigint): Fraction | undefined => fraction(Number(x), Number(denominator))
  const own = document.frames.atoms === 'primitive' ? undefined : lattice!.conventionalFromPrimitive
  const row = (v: readonly number[]): (Fraction | undefined)[] =>
    [0, 1, 2].map(j => over(v.reduce((sum, x, i) => sum + BigInt(x) * numerators[i][j], 0n)))
  const units = own ?? UNIT
  const toNew = units.map(row)
  if (!toNew.flat().every(Boolean)) return undefined
  return (position, translation) => {
    const offset = row(translation)
    return itemsOf(position).map((_, j) => {
      const times = itemsOf(position).map((_, i) => toNew[i][j]!)
      const moved = plus(sumOf(itemsOf(position), times), offset[j] ?? NONE)
      return writeSum(j < lattice!.dimension ? wrapped(moved) : moved, () => true, 'fraction')
    })
  }
}
const UNIT: Mat3 = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
]
const NONE: Fraction = { p: 0, q: 1 }

function inSpace({ lattice }: Crystal): Place {
  return (position, translation) => {
    const offset = combine(translation, lattice!.primitive)
    return itemsOf(position).map(({ value }, i) =>
      offset[i] === 0 ? undefined : formatNumber(value + offset[i], DIGITS),
    )
  }
}

function itemWith(text: string, [start, end]: Span, position: VectorValue, numbers: (string | undefined)[]) {
  const edits = replaceVector(text, position, numbers).map(edit => ({
    at: [edit.at[0] - start, edit.at[1] - start] as const,
    text: edit.text,
  }))
  return applyEdits(text.slice(start, end), edits)
}

const afterFlowItem = ({ at: [, end] }: AtomEntry, items: readonly string[]): TextEdit => ({
  at: [end, end],
  text: items.map(item => `, ${item}`).join(''),
})

function afterBlockItem(text: string, { at, item }: AtomEntry, items: readonly string[]): TextEdit {
  const dash = text.slice(lineStart(text, at[0]), at[0])
  const feed = lineBreak(text)
  const end = item[1]
  const lines = items.map(line => `${dash}${line}${feed}`).join('')
  return { at: [end, end], text: text[end - 1] === '\n' ? lines : `${feed}${lines.slice(0, -feed.length)}` }
}
