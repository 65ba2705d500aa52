import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { embedded, readFromView, readToView } from '../../../client/messages.ts'
import { bandsAnswer, sceneAnswer, zoneSolidAnswer } from '../../../server/src/language/zone-view.ts'
import { checked, fixture, NAMES } from '../exchange/support.ts'

const range = { start: { line: 1, character: 2 }, end: { line: 1, character: 5 } }
const FROM_VIEW = [
  { kind: 'ready' },
  { kind: 'reveal', version: 3, range },
  { kind: 'append', version: 3, labels: ['Γ', 'X1'], newPiece: true },
  { kind: 'solid', n: 2 },
  { kind: 'figure', what: 'zone', view: [70, 30.5] },
  { kind: 'png', data: 'iVBORw0KGgo=', scale: 4 },
] as const

describe('from the view', () => {
  test.each(FROM_VIEW)('$kind', message => expect(readFromView(message)).toEqual(message))

  test('anything else is nothing, and never throws', () => {
    fc.assert(
      fc.property(fc.anything(), data => {
        expect(readFromView(data)).toBeUndefined()
      }),
    )
  })

  test('a message with one field spoilt is nothing', () => {
    const spoilt = fc
      .constantFrom(...FROM_VIEW.slice(1))
      .chain(message =>
        fc
          .constantFrom(...Object.keys(message))
          .chain(key => fc.anything().map(value => ({ message: { ...message, [key]: value }, key, value }))),
      )
    fc.assert(
      fc.property(spoilt, ({ message }) => {
        const read = readFromView(message)
        if (read !== undefined) expect(read).toEqual(message)
      }),
    )
  })

  test.each([
    { kind: 'append', version: 1, labels: [], newPiece: false },
    { kind: 'append', version: 1, labels: ['x'.repeat(33)], newPiece: false },
    { kind: 'append', version: -1, labels: ['X'], newPiece: false },
    { kind: 'solid', n: 1e9 },
    { kind: 'figure', what: 'zone', view: [Number.NaN, 0] },
    { kind: 'png', data: 'javascript:alert(1)', scale: 2 },
    { kind: 'png', data: 'AAAA', scale: 3 },
    { kind: 'reveal', version: 1, range: { start: { line: -1, character: 0 }, end: range.end } },
  ])('%j is refused', message => expect(readFromView(message)).toBeUndefined())
})

describe('to the view', () => {
  test.each(NAMES)('what the server makes of %s arrives whole', name => {
    const { snapshot } = checked(fixture(name))
    for (const number of snapshot.documents.keys()) {
      const { scene, reason } = sceneAnswer(snapshot, number + 1)
      // As it comes through the channel: JSON.
      const sent = JSON.parse(
        JSON.stringify({ kind: 'scene', uri: 'a:b', version: 0, scene, reason: reason ?? '' }),
      )
      expect(readToView(sent)).toEqual(sent)
      const bands = JSON.parse(JSON.stringify({ kind: 'bands', ...bandsAnswer(snapshot, number + 1) }))
      expect(readToView(bands)).toEqual(bands)
      const solid = JSON.parse(
        JSON.stringify({ kind: 'solid', n: 2, solid: zoneSolidAnswer(snapshot, number + 1, 2).solid }),
      )
      expect(readToView(solid)).toEqual(solid)
    }
  })

  test('anything else is nothing, and never throws', () => {
    fc.assert(
      fc.property(fc.anything(), data => {
        expect(readToView(data)).toBeUndefined()
      }),
    )
    const kinds = fc.constantFrom('scene', 'bands', 'cursor', 'solid', 'save')
    fc.assert(
      fc.property(
        kinds,
        fc.dictionary(fc.string(), fc.anything()),
        (kind, rest) => void readToView({ ...rest, kind }),
      ),
    )
  })

  test('an edge between vertices that are not there is refused', () => {
    const solid = {
      vertices: [
        [0, 0, 0],
        [1, 0, 0],
      ],
      edges: [[0, 1]],
      faces: [],
    }
    expect(readToView({ kind: 'solid', n: 2, solid })).toBeDefined()
    expect(readToView({ kind: 'solid', n: 2, solid: { ...solid, edges: [[0, 2]] } })).toBeUndefined()
  })
})

test('messages stand in a page as data: no mark of HTML, the same after parsing', () => {
  fc.assert(
    fc.property(fc.string(), reason => {
      const message = { kind: 'scene', uri: 'file:///x', version: 1, scene: null, reason } as const
      const text = embedded([message, { ...message, reason: `</script>${reason}<!--` }])
      expect(text).not.toContain('<')
      expect(JSON.parse(text)[0]).toEqual(message)
    }),
  )
})
