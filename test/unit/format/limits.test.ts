/** What a hostile or very large file may cost: time and memory grow with the size only, and there is an end. */
import { describe, expect, test } from 'vitest'
import { decode } from '../../../server/src/format/decode.ts'
import { DEEPEST, MOST_CHARACTERS, MOST_FOR_YAML } from '../../../server/src/format/yaml.ts'
import { problemsOf } from './fixture.ts'

const messages = (text: string) => problemsOf(text).map(({ message }) => message)
const LATTICE = 'lattice: {bravais: cP, a: 1}\n'

describe('size', () => {
  test('a file has a largest size', () => {
    expect(messages(`${LATTICE}#${'x'.repeat(MOST_CHARACTERS)}`)).toEqual([
      'The file has 8,000,030 characters; it is read up to 8,000,000.',
    ])
  })
  test('plain lists of atoms do not count for the smaller limit of all else', () => {
    const row = '  - Si: [0.123456, 0.123456, 0.123456]\n'
    const atoms = Math.ceil(MOST_FOR_YAML / row.length) + 10
    const { documents, problems } = decode(`${LATTICE}atoms:\n${row.repeat(atoms)}path: Γ – X\n`)
    expect(problems).toEqual([])
    expect(documents[0].problems).toEqual([])
    expect(documents[0].atoms?.items.length).toBe(atoms)
    expect(documents[0].path?.pieces.length).toBe(1)
    expect(messages(`${LATTICE}title: ${'x'.repeat(MOST_FOR_YAML)}\n`)).toEqual([
      'The file has 500,037 characters; it is read up to 500,000.',
    ])
  })
  test('a fault above a very long list is told, not its size', () => {
    const rows = '  - Si: [0.123456, 0.123456, 0.123456]\n'.repeat(20_000)
    expect(messages(`${LATTICE}title: "open\natoms:\n${rows}`)).toEqual([
      'A text begins here and is not closed: `"` is missing.',
    ])
    expect(messages(`--- |\n${rows}`)).toEqual([
      'The file has 780,006 characters that are no plain list of atoms; it is read up to 500,000.',
    ])
  })
  test('problems of a document are told up to a thousand', () => {
    expect(problemsOf(`${LATTICE}points: {${'1: [0, 0, 0], '.repeat(3000)}}\n`).length).toBe(1000)
  })
})

describe('depth', () => {
  test.each(['[', '{', '- ', '? ', '[{a: ', '- [', ': '])('%s without end', opening => {
    const text = `${LATTICE}---\n${opening.repeat(5000)}`
    for (let again = 0; again < 3; again++) {
      const { documents, problems } = decode(text)
      expect(documents.map(({ lattice }) => lattice?.bravais?.value)).toEqual(['cP'])
      expect(problems.map(({ message }) => message)).toEqual([
        `Lists and mappings are nested over ${DEEPEST} levels deep here: the document is not read.`,
      ])
    }
  })
  test('blocks by indentation', () => {
    const text = Array.from({ length: 300 }, (_, i) => `${' '.repeat(i)}a:`).join('\n')
    expect(messages(text)).toEqual([
      `Lists and mappings are nested over ${DEEPEST} levels deep here: the document is not read.`,
    ])
  })
  test('as deep as that is fine for YAML', () => {
    const text = `title: ${'['.repeat(60)}${']'.repeat(60)}\n${LATTICE}`
    expect(messages(text)).toEqual(['`title` is a text, not a list.'])
  })
})

describe('aliases', () => {
  test('that stand for exponentially much are not followed', () => {
    const levels = Array.from({ length: 40 }, (_, i) => `x${i + 1}: &x${i + 1} [*x${i}, *x${i}, *x${i}]\n`)
    const found = messages(`x0: &x0 [a, b]\n${levels.join('')}${LATTICE}path: *x40\n`)
    expect(found).toEqual(['The aliases of this document stand for so much text that it is not read.'])
  })
  test('to one long text, many times', () => {
    const text = `title: &t ${'Γ – X – '.repeat(2000)}X\n${LATTICE}path: [${'*t, '.repeat(5000)}]\n`
    expect(messages(text)).toEqual([
      'The aliases of this document stand for so much text that it is not read.',
    ])
  })
  test('of aliases, in a long row', () => {
    const text = `a0: &a0 x\n${Array.from({ length: 9000 }, (_, i) => `a${i + 1}: &a${i + 1} *a${i}\n`).join('')}`
    expect(problemsOf(text).length).toBeGreaterThan(0)
  })
  test('within themselves', () => {
    expect(messages(`${LATTICE}atoms: &x [*x]\n`)).toEqual(['`*x` stands inside of what it stands for.'])
    expect(messages(`${LATTICE}points: &x {Q: {between: *x, at: 1}}\n`)).toEqual([
      '`*x` stands inside of what it stands for.',
    ])
  })
  test('in reasonable numbers are fine', () => {
    const text = `${LATTICE}points: {Q: &q [0, 0, 0], ${Array.from({ length: 500 }, (_, i) => `P${i}: *q`).join(', ')}}\n`
    expect(messages(text)).toEqual([])
  })
})

describe('many of anything', () => {
  // Each would take minutes if the time grew with the square of the length.
  const SIZE = 15_000
  test.each([
    '- ',
    '-\n',
    '? ',
    ': ',
    ':\n',
    '"',
    '"\n',
    "'\n",
    '&a ',
    '*a ',
    '#\n',
    '# braggline: allow x\n',
    '\n',
    ' ',
    '\t\n',
    '[]',
    '[],',
    ',',
    '|\n',
    '! ',
    '!a ',
    '%\n',
    '---\n',
    '--- !a\n',
    '--- a\n',
    '...\n',
    'a\n',
    'a: b\n',
    'a: &a\n',
    'a: *a\n',
    '- a\n',
    '{a: 1},\n',
    'a: "\n',
    'a: |\n',
    '\r\n',
    '? a\n: b\n',
    '}',
    '- a\n\n #c\n',
    'a:\n  - Si: [0, 0, 0]\n',
    '  - Si: [0, 0, 0]\n',
    '  - Si: [0, 0, 0]\n #\n',
    '\u0002',
    '\u001f',
    '<<<<<<< a\n',
  ])('%j', piece => {
    const count = Math.floor(SIZE / piece.length)
    for (const start of ['', 'path: ', `${LATTICE}atoms:\n`, 'points: {'])
      expect(decode(start + piece.repeat(count))).toBeDefined()
  })
})
