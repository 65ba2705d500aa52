import { describe, expect, test } from 'vitest'
import { displayLabel, formatPath, normaliseLabel, parsePath } from '../../../server/src/format/path.ts'

describe('labels', () => {
  test.each([
    ['X', 'X', 'X'],
    ['Γ', 'Γ', 'Γ'],
    ['X1', 'X1', 'X₁'],
    ['X_1', 'X1', 'X₁'],
    ['X₁', 'X1', 'X₁'],
    ['X_12', 'X12', 'X₁₂'],
    ['Gamma', 'Γ', 'Γ'],
    ['Delta', 'Δ', 'Δ'],
    ['Sigma_1', 'Σ1', 'Σ₁'],
    ['Lambda', 'Λ', 'Λ'],
    ['Σ1', 'Σ1', 'Σ₁'],
    ['G', 'G', 'G'],
    ['GammaX', 'GammaX', 'GammaX'],
    ["H'", "H'", "H'"],
    ['H′', "H'", "H'"],
    ['H’', "H'", "H'"],
    ["K1'", "K1'", "K₁'"],
    ['∑', 'Σ', 'Σ'],
    ['∆', 'Δ', 'Δ'],
    ['Г', 'Γ', 'Γ'], // Cyrillic
    ['Х', 'X', 'X'], // Cyrillic
    ['Μ', 'M', 'M'], // Greek capital Mu
    ['Ｘ', 'X', 'X'], // full width
    ['ab2c', 'ab2c', 'ab2c'],
  ])('%s is %s, shown as %s', (text, label, shown) => {
    expect(normaliseLabel(text)).toBe(label)
    expect(displayLabel(text)).toBe(shown)
  })

  test.each(['', ' ', '1X', '_1', 'X_', 'X_1_2', 'X1_2', 'X-1', 'X 1', "'", 'K̄', '½', 'X'.repeat(33)])(
    '"%s" is none',
    text => expect(normaliseLabel(text)).toBeUndefined(),
  )
})

/** `Γ –20– X | U – X`: labels, separators with their steps, and breaks between pieces, as they were understood. */
function understood(text: string) {
  const { pieces, faults } = parsePath(text, (from, to) => [from, to])
  for (const { at, labels, segments } of pieces) {
    expect(at).toEqual([labels[0].at[0], labels[labels.length - 1].at[1]])
    expect(segments.length).toBe(labels.length - 1)
    for (const label of labels) expect(text.slice(...label.at)).toBe(label.text)
    for (const [i, segment] of segments.entries()) {
      expect([segment.from, segment.to]).toEqual([labels[i], labels[i + 1]])
      expect(segment.at).toEqual([labels[i].at[0], labels[i + 1].at[1]])
      if (segment.steps) expect(text.slice(...segment.steps.at)).toBe(String(segment.steps.value))
    }
  }
  const written = pieces.map(({ labels, segments }) =>
    labels
      .map(({ label }, i) => `${i > 0 ? ` ${text.slice(...segments[i - 1].separator)} ` : ''}${label}`)
      .join(''),
  )
  return { path: written.join(' | '), faults: faults.map(({ at, message }) => [text.slice(...at), message]) }
}

describe('paths', () => {
  test.each([
    ['Γ – X', 'Γ – X'],
    ['Γ-X→W', 'Γ - X → W'],
    ['Γ – X – W – K – Γ – L | U – X', 'Γ – X – W – K – Γ – L | U – X'],
    ['Gamma - X_1 | Sigma1 - H′', "Γ - X1 | Σ1 - H'"],
    ['Γ –(60)– X –( 7 )– W', 'Γ –(60)– X –( 7 )– W'],
    ['Γ → (5) → X', 'Γ → (5) → X'],
    ['Γ\n–\nX\n|\nU – X\n', 'Γ – X | U – X'],
    ['Γ — X − W ‐ K', 'Γ — X − W ‐ K'], // Em dash, minus sign, hyphen.
    ['', ''],
  ])('%s', (text, path) => expect(understood(text)).toEqual({ path, faults: [] }))

  test.each([
    ['Γ –', '', '–', 'A label is missing after `–`.'],
    ['Γ – X –', 'Γ – X', '–', 'A label is missing after `–`.'],
    ['– X', '', '–', 'A label is missing before `–`.'],
    ['Γ – – X', 'Γ – X', '–', 'Two separators stand side by side: a label is missing between them.'],
    ['Γ', '', 'Γ', 'A piece of a path has two labels at least; `Γ` stands alone.'],
    ['Γ – X | W', 'Γ – X', 'W', 'A piece of a path has two labels at least; `W` stands alone.'],
    ['| Γ – X', 'Γ – X', '|', 'No piece of the path stands before this `|`.'],
    ['Γ – X |', 'Γ – X', '|', 'No piece of the path stands after this `|`.'],
    ['Γ – X | | U – X', 'Γ – X | U – X', '|', 'No piece of the path stands before this `|`.'],
    ['|', '', '|', 'No piece of the path stands before this `|`.'],
    ['Γ – X W – K', 'Γ – X | W – K', 'W', 'A separator is missing between `X` and `W`.'],
    ['Γ -> X', '', '->', '`->` is no separator: write `–`, `-` or `→`.'],
    ['Γ -- X', '', '--', '`--` is no separator: write `–`, `-` or `→`.'],
    ['Γ, X', '', ',', 'Labels are joined by `–`, and `|` breaks the path; `,` does neither.'],
    ['\\Gamma – X', '', '\\Gamma', 'The label is written `Γ`.'],
    ['Γ – 3 – X – W', 'X – W', '3', '`3` is no label: a label is a letter, then letters, digits and primes.'],
    ['Γ – X* – W', 'Γ – X', '*', '`*` cannot stand in a path.'],
    ['Γ –(20) X', '', '(20)', 'A number of steps stands between two separators, as in `Γ –(40)– X`.'],
  ])('%s', (text, path, at, message) => expect(understood(text)).toEqual({ path, faults: [[at, message]] }))

  test.each([
    ['Γ –(0)– X', '0'],
    ['Γ –(2.5)– X', '2.5'],
    ['Γ –(n)– X', 'n'],
  ])('no number of steps: %s', (text, at) => {
    const { path, faults } = understood(text)
    expect(path).toBe(text)
    expect(faults).toEqual([
      [at, 'Between the parentheses stands the number of steps of this segment: a whole number from 1.'],
    ])
  })

  test('a million steps are enough', () => {
    expect(understood('Γ –(1000001)– X').faults).toEqual([
      ['1000001', 'A segment has at most 1,000,000 steps.'],
    ])
  })

  test('the time for a hostile text grows with its length only', () => {
    for (const piece of ['-( ', '- ', ' ', '(', '–(a', 'X', "'", '_', '|'])
      expect(parsePath(piece.repeat(50_000), (from, to) => [from, to]).pieces.length).toBeLessThan(2)
  })

  test('written back', () => {
    const pieces = [
      ['Γ', 'X1'],
      ['U', 'X1'],
    ]
    expect(formatPath(pieces)).toBe('Γ – X1 | U – X1')
    expect(formatPath(pieces, displayLabel)).toBe('Γ – X₁ | U – X₁')
  })
})
