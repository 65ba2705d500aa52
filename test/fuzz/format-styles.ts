/** Sound files in many styles: blocks and brackets, comments and blank lines, lists and long texts. */
import fc from 'fast-check'

/** How one file is written. */
export interface Style {
  readonly feed: string
  readonly indent: string
  readonly next: () => number
}

type Value =
  | string
  | { readonly entries: readonly (readonly [string, Value])[] }
  | { readonly items: readonly Value[] }

const mapping = (...entries: (readonly [string, Value])[]): Value => ({ entries })
const list = (...items: Value[]): Value => ({ items })

const LATTICES: readonly Value[] = [
  mapping(['bravais', 'tI'], ['a', '3.8'], ['c', '2.5*a']),
  mapping(
    ['vectors', list(list('0', 'a/2', 'a/2'), list('a/2', '0', 'a/2'), list('a/2', 'a/2', '0'))],
    ['a', '5.43'],
  ),
]
const PARTS: readonly (readonly [string, Value])[] = [
  ['title', '"Names: a, b"'],
  ['unit', 'angstrom'],
  [
    'atoms',
    list(
      mapping(['Si', list('0', '0', '0')]),
      mapping(['O', mapping(['at', list('1/4', '1/4', '0.12')], ['name', 'up'])]),
      mapping(['"N"', list('.5', '1/3', '1e-3')]),
    ),
  ],
  ['frames', mapping(['atoms', 'cartesian'], ['points', 'conventional'])],
  [
    'points',
    mapping(
      ['Q', list('0.25', '1/3', '0')],
      ['X_1', list('1/2', '0', '0')],
      ['R', mapping(['between', list('Γ', 'Q')], ['at', '0.85'])],
    ),
  ],
  ['sampling', mapping(['spacing', '0.02'])],
  ['mesh', mapping(['divisions', list('4', '4', '4')], ['shift', list('0', '0', '1/2')])],
  ['supercell', list('2', '2', '2')],
  ['checks', mapping(['mesh-uneven', 'off'])],
]
const PATHS: readonly Value[] = [
  'Γ – X – W | U – X',
  '"Γ – X –(20)– W"',
  "'Γ-X-W|U-X'",
  list('Γ – X', '"W – K | U – X"', 'Γ – L – W – X'),
  'Γ → X',
]

function write(value: Value, style: Style, depth: string, flow: boolean): string {
  const { feed, indent, next } = style
  if (typeof value === 'string') return ` ${value}`
  const inner =
    'entries' in value
      ? value.entries.map(([key, part]) => ({ key, part }))
      : value.items.map(part => ({ key: undefined, part }))
  if (flow || next() < 0.4) {
    const wide = next() < 0.3
    const blank = wide ? `${feed}${depth}${indent}` : next() < 0.2 ? '' : ' '
    const parts = inner.map(({ key, part }) =>
      key === undefined
        ? write(part, style, depth + indent, true).trimStart()
        : `${key}:${write(part, style, depth + indent, true)}`,
    )
    const [open, close] = 'entries' in value ? '{}' : '[]'
    const note = wide && next() < 0.3 ? ' # inside' : ''
    return ` ${open}${wide ? `${note}${blank}` : ''}${parts.join(`,${blank}`)}${wide && next() < 0.5 ? ',' : ''}${wide ? `${feed}${depth}` : ''}${close}`
  }
  const deeper = depth + indent
  const note = next() < 0.2 ? ' # a block' : ''
  const lines = inner.map(({ key, part }) => {
    const own = typeof part === 'string' || next() < 0.5
    if (key !== undefined)
      return `${between(style, deeper)}${deeper}${key}:${write(part, style, deeper, false)}${comment(style, part)}`
    if (typeof part !== 'string' && 'entries' in part && part.entries.length === 1 && own) {
      const [[name, only]] = part.entries
      return `${between(style, deeper)}${deeper}- ${name}:${write(only, style, `${deeper}  `, true)}${comment(style, '')}`
    }
    return `${between(style, deeper)}${deeper}-${write(part, style, deeper, true)}${comment(style, '')}`
  })
  return `${note}${feed}${lines.join(feed)}`
}

const comment = ({ next }: Style, value: Value): string =>
  typeof value === 'string' && next() < 0.25 ? ` # note ${Math.floor(next() * 99)}` : ''

function between({ next, feed }: Style, depth: string): string {
  if (next() < 0.85) return ''
  return next() < 0.5 ? feed : `${depth}# above${feed}`
}

/** A seeded generator (D. H. Lehmer), so that fast-check can repeat a style. */
function generator(seed: number): () => number {
  let state = (seed % 2147483646) + 1
  for (let i = 0; i < 5; i++) state = (state * 48271) % 2147483647
  return () => {
    state = (state * 48271) % 2147483647
    return state / 2147483647
  }
}

export const styled: fc.Arbitrary<string> = fc
  .record({
    seed: fc.nat(),
    lattice: fc.constantFrom(...LATTICES),
    path: fc.option(fc.constantFrom(...PATHS)),
    parts: fc.subarray([...PARTS]),
    feed: fc.constantFrom('\n', '\n', '\r\n'),
    indent: fc.constantFrom('  ', '    ', ' '),
    flow: fc.constantFrom(false, false, false, true),
    ending: fc.boolean(),
  })
  .map(({ seed, lattice, path, parts, feed, indent, flow, ending }) => {
    const style: Style = { feed, indent, next: generator(seed) }
    const entries: (readonly [string, Value])[] = [...parts, ['lattice', lattice]]
    if (path) entries.push(['path', path])
    entries.sort(() => style.next() - 0.5)
    const text = flow
      ? write(mapping(...entries), style, '', true).trimStart()
      : entries
          .map(
            ([key, value]) =>
              `${between(style, '')}${key}:${write(value, style, '', false)}${comment(style, value)}`,
          )
          .join(feed)
    return ending ? `${text}${feed}` : text
  })
