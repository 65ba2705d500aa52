/** Nearest words, elements, the key table and what is made of it. */
import Ajv from 'ajv'
import { describe, expect, test } from 'vitest'
import { parse } from 'yaml'
import { covalentRadius, ELEMENTS, elementOf } from '../../../server/src/crystal/elements.ts'
import { decode } from '../../../server/src/format/decode.ts'
import { findKey, KEYS, keyDocumentation, keyName, keysBelow } from '../../../server/src/format/keys.ts'
import { editDistance, nearest } from '../../../server/src/format/nearest.ts'
import { needsQuotes, scalarText } from '../../../server/src/format/quote.ts'
import { jsonSchema } from '../../../server/src/format/schema.ts'
import { problemsOf } from './fixture.ts'

describe('nearest words', () => {
  test.each([
    ['', '', 0],
    ['kitten', 'sitting', 3], // V. I. Levenshtein's distance of these two words: common practice.
    ['path', 'paht', 1],
    ['ca', 'abc', 3], // In the restricted form, where no letter is edited twice.
    ['abc', '', 3],
  ])('%s to %s', (from, to, edits) => {
    expect(editDistance(from, to)).toBe(edits)
    expect(editDistance(to, from)).toBe(edits)
  })
  test('counting stops at a limit', () => expect(editDistance('aaaaaaaa', 'bbbbbbbb', 2)).toBe(3))
  test('what was probably meant', () => {
    expect(nearest('paths', ['points', 'path'])).toBe('path')
    expect(nearest('PATH', ['pact', 'path'])).toBe('path')
    expect(nearest('Sl', ['H', 'Al', 'S', 'Si'])).toBe('S')
    expect(nearest('xyz', ['path', 'mesh'])).toBeUndefined()
    expect(nearest('', ['a'])).toBeUndefined()
    expect(nearest('x', ['y'])).toBeUndefined()
    expect(nearest('a'.repeat(100_000), ['b'.repeat(100_000)])).toBeUndefined()
  })
})

describe('elements', () => {
  test('118, each with its own symbol and name', () => {
    expect(ELEMENTS.length).toBe(118)
    expect(new Set(ELEMENTS.map(({ symbol }) => symbol)).size).toBe(118)
    expect(new Set(ELEMENTS.map(({ name }) => name)).size).toBe(118)
    for (const { symbol, name } of ELEMENTS) {
      expect(symbol).toMatch(/^[A-Z][a-z]?$/)
      expect(name).toMatch(/^[a-z]+$/)
    }
  })
  // The noble gases close the periods: 2, 10, 18, 36, 54, 86, 118 (from memory; any periodic table).
  test.each([
    ['He', 2],
    ['Ne', 10],
    ['Ar', 18],
    ['Kr', 36],
    ['Xe', 54],
    ['Rn', 86],
    ['Og', 118],
    ['Fe', 26],
    ['Gd', 64],
    ['Pb', 82],
    ['U', 92],
  ])('%s is number %d', (symbol, number) => expect(elementOf(symbol)?.number).toBe(number))
  // B. Cordero et al., Dalton Trans. 2008, 2832, table 2.
  test.each([
    ['H', 0.31],
    ['C', 0.76],
    ['Si', 1.11],
    ['Fe', 1.52],
    ['Cs', 2.44],
    ['Pb', 1.46],
  ])('covalent radius of %s', (symbol, radius) => expect(covalentRadius(symbol)).toBe(radius))
  test('none where no value is at hand', () => {
    expect(covalentRadius('Og')).toBeUndefined()
    expect(covalentRadius('Xx')).toBeUndefined()
  })
})

describe('text written into a file', () => {
  test.each(['Γ – X | W', 'Fe_up', 'Fm-3m', 'hinuma-2017', 'a-b', "H'"])('%s stays plain', text =>
    expect(scalarText(text)).toBe(text),
  )
  test.each([
    '',
    'yes',
    'No',
    'off',
    'Y',
    'n',
    'null',
    '~',
    'true',
    '12',
    '.5',
    '-1',
    '1/2',
    '.nan',
    'a: b',
    'a:',
    '- a',
    '#x',
    'a #b',
    '[a',
    'a, b',
    '*a',
    '&a',
    '!a',
    '|',
    '> x',
    '%a',
    '@a',
    '`a',
    '"a"',
    "'a'",
    ' a',
    'a ',
    'a\nb',
    '---',
    '? a',
    '{a}',
  ])('%j is quoted', text => {
    expect(needsQuotes(text)).toBe(true)
    for (const version of ['1.1', '1.2'] as const) {
      expect(parse(`k: ${scalarText(text)}\n`, { version })).toEqual({ k: text })
      expect(parse(`[${scalarText(text)}]`, { version })).toEqual([text])
      expect(parse(`{${scalarText(text)}: 1}`, { version })).toEqual({ [text]: 1 })
    }
  })
})

describe('the key table', () => {
  test('has each path once, and each under a mapping of its own', () => {
    const paths = KEYS.map(({ path }) => path)
    expect(new Set(paths).size).toBe(paths.length)
    for (const path of paths)
      if (path.includes('.')) expect(paths).toContain(path.slice(0, path.lastIndexOf('.')))
  })
  test('says of each key what it is, in sentences, with a value that may stand there', () => {
    for (const row of KEYS) {
      expect(row.doc, row.path).toMatch(/^[A-Zk].*[.?]$/)
      expect(row.doc.match(/[.?](?= |$)/g)!.length, row.path).toBeLessThanOrEqual(3)
      if (row.kind === 'word')
        expect(
          row.words!.map(({ word }) => word),
          row.path,
        ).toContain(row.example)
      for (const { meaning } of row.words ?? []) expect(meaning).toMatch(/^\S.*\.$/)
    }
  })
  test('its examples and skeletons are sound', () => {
    for (const row of KEYS.filter(({ path }) => !path.includes('.'))) {
      const lattice = row.path === 'lattice' ? '' : 'lattice: {bravais: cF, a: 5.43}\n'
      const examples = [` ${row.example}`, row.skeleton ?? '']
      for (const example of examples.filter(Boolean)) {
        const value = example.replace(/\$\{\d+:([^}]*)\}/g, '$1').replace(/\$\{\d+\|([^,]*),[^}]*\|\}/g, '$1')
        expect(
          problemsOf(`${lattice}${row.path}:${value}\n`).map(({ message }) => message),
          row.path,
        ).toEqual([])
      }
    }
  })
  test('is asked by the names that stand in a file', () => {
    const found = (...names: string[]) => findKey(names)?.path
    expect(found('lattice', 'a')).toBe('lattice.a')
    expect(found('points', 'X')).toBe('points.*')
    expect(found('points', 'X', 'between')).toBe('points.*.between')
    expect(found('atoms', 'Si', 'at')).toBe('atoms.*.at')
    expect(found('mesh', 'fine', 'shift')).toBe('mesh.shift')
    expect(found('mesh', 'fine')).toBe('mesh')
    expect(found('checks', 'path-misses')).toBe('checks.*')
    expect(found('lattice', 'x')).toBeUndefined()
    expect(found('x')).toBeUndefined()
    expect(found()).toBeUndefined()
  })
  test('its documentation is short', () => {
    for (const row of KEYS) {
      const text = keyDocumentation(row.path.replace('*', 'X').split('.'))!
      expect(text.split('\n').length, row.path).toBeLessThanOrEqual(14)
      expect(text).toContain(row.doc)
    }
    expect(keyDocumentation(['x'])).toBeUndefined()
  })
})

describe('the JSON Schema', () => {
  const validate = new Ajv({ strict: true, strictRequired: false, allowUnionTypes: true }).compile(
    jsonSchema(),
  )
  const isValid = (text: string) => validate(parse(text))

  test('is one of draft-07', () =>
    expect(jsonSchema().$schema).toBe('http://json-schema.org/draft-07/schema#'))
  test('tells every key', () => {
    const told = JSON.stringify(jsonSchema())
    for (const row of KEYS) if (keyName(row) !== '*') expect(told).toContain(`"${keyName(row)}":{`)
  })

  const LATTICE = 'lattice: {bravais: cF, a: 5.43}\n'
  test.each([
    LATTICE,
    'lattice: {vectors: [[0, a/2, a/2], [a/2, 0, a/2], [a/2, a/2, 0]], a: 5.43(1), centring: P}\n',
    'lattice: {bravais: hp, a: 2*sqrt(3), height: 20}\npoints: {K: [1/3, 1/3], Q: {between: [Γ, K], at: 0.5}}\n',
    `${LATTICE}atoms: [Si: [0, 0, 0], Fe: {at: [1/2, 1/2, -.5], name: up}]\nspace-group: 225\n`,
    `${LATTICE}title: 42\nunit: nm\ntolerance: 1e-3\nspace-group: P 6_3/m m c\ntime-reversal: false\nlabels: none\n`,
    `${LATTICE}frames: {atoms: cartesian, points: 2pi/a}\npath: [Γ – X, U – X]\nsampling: {steps: 4}\nsupercell: [2, 2, 2]\n`,
    `${LATTICE}path: recommended\nmesh: {divisions: [4, 4, 4], shift: [0, 0, 1/2]}\nsupercell: [[1, 0, 0], [0, 1, 0], [0, 0, 2]]\n`,
    `${LATTICE}mesh: {coarse: {divisions: [4, 4, 4]}, fine: {spacing: 0.1}}\nchecks: {path-misses: off}\n`,
  ])('takes what the decoder takes: %j', text => {
    expect(problemsOf(text)).toEqual([])
    expect(isValid(text), JSON.stringify(validate.errors)).toBe(true)
  })

  test.each([
    'path: Γ – X\n',
    'lattice: {a: 5}\n',
    'lattice: {bravais: fcc, a: 5}\n',
    'lattice: {bravais: cF, a: -5}\n',
    'lattice: {bravais: cF, a: [5]}\n',
    'lattice: {bravais: cF, a: five}\n',
    'lattice: {bravais: cF, a: 5, x: 1}\n',
    'lattice: {vectors: [1, 0, 0]}\n',
    `${LATTICE}paths: Γ – X\n`,
    `${LATTICE}unit: pm\n`,
    `${LATTICE}atoms: {Si: [0, 0, 0]}\n`,
    `${LATTICE}atoms: [Xx: [0, 0, 0]]\n`,
    `${LATTICE}atoms: [Si: [0, 0]]\n`,
    `${LATTICE}atoms: [{Si: [0, 0, 0], Ge: [0, 0, 0]}]\n`,
    `${LATTICE}points: {Q: [0, 0, 0, 0]}\n`,
    `${LATTICE}points: {Q: {between: [Γ], at: 1}}\n`,
    `${LATTICE}points: {Q: {between: [Γ, X]}}\n`,
    `${LATTICE}points: {1: [0, 0, 0]}\n`,
    `${LATTICE}path: {Γ: X}\n`,
    `${LATTICE}sampling: {steps: 4, total: 5}\n`,
    `${LATTICE}sampling: {steps: 0}\n`,
    `${LATTICE}mesh: {divisions: [0, 4, 4]}\n`,
    `${LATTICE}mesh: {shift: [0, 0, 0]}\n`,
    `${LATTICE}mesh: {fine: {divisions: 4}}\n`,
    `${LATTICE}space-group: 231\n`,
    `${LATTICE}time-reversal: maybe\n`,
    `${LATTICE}checks: {path-misses: false}\n`,
    `${LATTICE}supercell: 2\n`,
  ])('refuses what the decoder refuses: %j', text => {
    expect(problemsOf(text).length).toBeGreaterThan(0)
    expect(isValid(text)).toBe(false)
  })
})

test('a row of the table is all that a key of a known kind needs to be read', () => {
  const names = new Set(keysBelow('').map(keyName))
  const { documents } = decode(
    `lattice: {bravais: cP, a: 1}\n${[...names]
      .filter(name => name !== 'lattice')
      .map(name => `${name}:`)
      .join('\n')}\n`,
  )
  expect(new Set(documents[0].keys.keys())).toEqual(names)
})
