import type { BravaisType } from '../../crystal/bravais.ts'
import { norm, type Vec3 } from '../../crystal/vector.ts'
import type { Fix, NumberValue, Span, TextEdit, VectorValue } from '../../format/model.ts'
import { formatNumber } from '../../format/numbers.ts'
import { length } from '../../meaning/wording.ts'
import type { Check } from '../check.ts'
import { named } from './kinship.ts'
import { exactType, nearlySymmetric } from './nearby-types.ts'

interface Facts {
  /** The higher type, and what the vectors are exactly. */
  readonly nearly: BravaisType
  readonly exactly?: BravaisType
  /** A length in the file's unit. */
  readonly misfit: number
}

export const latticeNearlySymmetric: Check<Facts> = {
  id: 'lattice-nearly-symmetric',
  severity: 'warning',
  needs: ['unit'],
  summary: 'The vectors miss a higher symmetry by a rounding of the digits written, or by under 0.02 %.',
  why: 'A program that decides more strictly finds the lower symmetry: then many more k-points are computed, and labels and degeneracies are lost.',
  wrong: 'lattice:\n  vectors: [[3.21, 0, 0], [-1.605, 2.78, 0], [0, 0, 5.21]]\n',
  right: 'lattice:\n  a: 3.21\n  vectors: [[a, 0, 0], [-a/2, sqrt(3)/2*a, 0], [0, 0, 5.21]]\n',
  *run({ document, crystal }) {
    const { vectors } = document.lattice ?? {}
    const found = nearlySymmetric(crystal)
    if (!vectors || !found) return
    const { type, rows, rounding } = found
    const { primitive, dimension } = crystal.lattice!
    const exactly = exactType(primitive, dimension)?.bravais
    const changed = changes(vectors.rows as readonly VectorValue[], rows)
    const at: Span = changed.length === 1 ? changed[0].at : vectors.at
    const cause = rounding
      ? 'the rounding of the digits written'
      : `${share(type.misfit / norm(primitive[0]))} of a vector`
    const otherwise = exactly ? `: a stricter program finds ${named(exactly)}` : ''
    const fixes: Fix[] = [
      { title: `Write the vectors of an exact ${type.bravais} lattice`, safe: false, edits: changed },
    ]
    yield {
      at,
      message: `The vectors miss a lattice of type ${named(type.bravais!)} by ${length(type.misfit, crystal.unit, 6)}, ${cause}${otherwise}. Exactly it would be ${list(changed)}.`,
      facts: { nearly: type.bravais!, exactly, misfit: type.misfit },
      fixes,
    }
  },
}

const DIGITS = 10
/** What arithmetic leaves between equal numbers, relative to a vector. */
const SAME = 1e-9

function changes(written: readonly VectorValue[], rows: readonly Vec3[]): TextEdit[] {
  return written.flatMap(({ items }, i) =>
    (items as readonly NumberValue[]).flatMap(({ at, value }, k) =>
      Math.abs(value - rows[i][k]) > SAME * norm(rows[i])
        ? [{ at, text: formatNumber(rows[i][k], DIGITS) }]
        : [],
    ),
  )
}

const share = (x: number): string => `${formatNumber(x * 100, 3)} %`

/** A few numbers are named, many are not. */
const FEW = 3
const list = (edits: readonly TextEdit[]): string =>
  edits.length <= FEW ? edits.map(({ text }) => text).join(' and ') : `${edits.length} other numbers`
