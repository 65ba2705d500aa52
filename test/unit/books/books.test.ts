/** What holds of the books as they are entered. */
import { describe, expect, test } from 'vitest'
import { compiled } from '../../../server/src/books/book.ts'
import { BOOK_NAMES, BOOKS } from '../../../server/src/books/index.ts'
import { PLANE_LATTICES } from '../../../server/src/books/plane-lattices.ts'
import { BOOK_IDS } from '../../../server/src/format/model.ts'
import { normaliseLabel } from '../../../server/src/format/path.ts'

const VARIATIONS = [...Object.values(BOOKS), PLANE_LATTICES].flatMap(({ id, variations }) =>
  variations.map(variation => ({ name: `${id}: ${variation.condition}`, ...compiled(variation) })),
)

test('a file names the books as they are named here', () => {
  expect([...BOOK_NAMES, 'none']).toEqual([...BOOK_IDS])
  expect(BOOK_NAMES.map(name => BOOKS[name].id)).toEqual(BOOK_NAMES)
})

test('no book has two variations of one name', () => {
  for (const { variations } of [...Object.values(BOOKS), PLANE_LATTICES]) {
    const names = variations.map(({ condition }) => condition)
    expect(new Set(names).size).toBe(names.length)
  }
})

describe.each(VARIATIONS)('$name', ({ points, path, lines, parameterNames }) => {
  const labels = points.map(({ label }) => label)

  test('labels are spelled as a path spells them, each used once', () => {
    const all = [...labels, ...lines.map(({ label }) => label)]
    expect(all.map(normaliseLabel)).toEqual(all)
    expect(new Set(all).size).toBe(all.length)
  })

  test('path and lines name points that there are', () => {
    for (const piece of path) expect(piece.length).toBeGreaterThan(1)
    for (const label of [...path.flat(), ...lines.flatMap(({ ends = [] }) => ends)])
      expect(labels).toContain(label)
  })

  test('lines begin and end where they say', () => {
    for (const { forms, ends, t } of lines) {
      if (!ends) continue
      const place = (label: string) =>
        points.find(point => point.label === label)!.forms.map(({ parts }) => parts / 24)
      const at = (value: number) =>
        forms.map(({ parts, coefficients }) => parts / 24 + coefficients[0] * value)
      expect(at(0)).toEqual(place(ends[0]).map(x => expect.closeTo(x, 12)))
      expect(at(t!)).toEqual(place(ends[1]).map(x => expect.closeTo(x, 12)))
    }
  })

  test('every parameter is used', () => {
    // A parameter may serve the later ones only (ψ and φ of the C-centred monoclinic tables).
    const used = points.flatMap(({ forms }) => forms.map(({ coefficients }) => coefficients))
    const last = parameterNames.length - 1
    if (last >= 0) expect(used.some(coefficients => coefficients[last] !== 0)).toBe(true)
  })
})
