import { readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { beforeAll, describe, expect, test } from 'vitest'
import onig from 'vscode-oniguruma'
import textmate, { type IGrammar, type IToken } from 'vscode-textmate'

const require = createRequire(import.meta.url)
const grammarFile = new URL('../../syntaxes/braggline.tmLanguage.json', import.meta.url)

let grammar: IGrammar

beforeAll(async () => {
  await onig.loadWASM(readFileSync(require.resolve('vscode-oniguruma/release/onig.wasm')))
  const registry = new textmate.Registry({
    onigLib: Promise.resolve({
      createOnigScanner: (sources: string[]) => new onig.OnigScanner(sources),
      createOnigString: (text: string) => new onig.OnigString(text),
    }),
    loadGrammar: async () => textmate.parseRawGrammar(readFileSync(grammarFile, 'utf8'), 'grammar.json'),
  })
  grammar = (await registry.loadGrammar('source.braggline'))!
})

/** The tokens of each line. */
function tokens(lines: string[]): IToken[][] {
  let state = textmate.INITIAL
  return lines.map(line => {
    const result = grammar.tokenizeLine(line, state)
    state = result.ruleStack
    return result.tokens
  })
}

/**
 * A fixture carries what is expected in lines of carets: `#  ^^^ scope` under a line says that exactly those characters are
 * one token whose innermost scope begins with `scope`; `-` in place of a scope says that they have no scope of their own.
 * In column 0 the `#` is the first caret.
 */
function colours(fixture: string): void {
  const expected: { line: number; start: number; end: number; scope: string }[] = []
  const lines: string[] = []
  for (const line of fixture.replace(/^\n/, '').split('\n')) {
    const mark = /^#( *)(\^+) (\S+)$/.exec(line)
    if (!mark) lines.push(line)
    else {
      const start = mark[1] === '' ? 0 : 1 + mark[1].length
      expected.push({
        line: lines.length - 1,
        start,
        end: 1 + mark[1].length + mark[2].length,
        scope: mark[3],
      })
    }
  }
  expect(expected.length).toBeGreaterThan(0)
  const all = tokens(lines)
  for (const { line, start, end, scope } of expected) {
    const token = all[line].find(t => t.startIndex <= start && start < t.endIndex)!
    const found = token.scopes.at(-1)!.replace('source.braggline', '-')
    const where = `line ${line + 1}: ${lines[line]}`
    const text = lines[line].slice(start, end)
    expect({
      where,
      text: lines[line].slice(token.startIndex, token.endIndex),
      scope: found.slice(0, scope.length),
    }).toEqual({
      where,
      text,
      scope,
    })
  }
}

describe('the keys and what follows them', () => {
  test('a file in block form', () =>
    colours(`
title: Lead telluride, rock salt # a title
#^^^^ entity.name.tag
#    ^ punctuation.separator.key-value
#      ^^^^^^^^^^^^^^^^^^^^^^^^^ string.unquoted.title
#                                ^ punctuation.definition.comment
unit: angstrom
#     ^^^^^^^^ keyword.other.unit
lattice:
#^^^^^^ entity.name.tag
  bravais: cF
# ^^^^^^^ entity.name.tag
#          ^^ support.type.bravais
  a: 6.462
# ^ entity.name.tag
#    ^^^^^ constant.numeric
atoms:
  - Pb: [0, 1/2, -.5]
# ^ punctuation.definition.block.sequence.item
#   ^^ support.class.element
#       ^ punctuation.definition.sequence.begin
#        ^ constant.numeric
#         ^ punctuation.separator
#           ^ constant.numeric
#            ^ keyword.operator.arithmetic
#                ^ keyword.operator.arithmetic
#                 ^^ constant.numeric
#                   ^ punctuation.definition.sequence.end
space-group: Fm-3m
#^^^^^^^^^^ entity.name.tag
#            ^^^^^ constant.other.symbol.space-group
time-reversal: no
#              ^^ constant.language.boolean
labels: hinuma-2017
#       ^^^^^^^^^^^ support.constant.label-book
sampling:
  spacing: 0.02
# ^^^^^^^ entity.name.tag
#          ^^^^ constant.numeric
`))

  test('a file in flow form', () =>
    colours(`
lattice: {bravais: hP, a: 3.19, c: 15}
#        ^ punctuation.definition.mapping.begin
#         ^^^^^^^ entity.name.tag
#                  ^^ support.type.bravais
#                    ^ punctuation.separator
#                      ^ entity.name.tag
#                         ^^^^ constant.numeric
#                                  ^^ constant.numeric
#                                    ^ punctuation.definition.mapping.end
atoms: [Mo: [0, 0, 0], {S: {at: [1/3, 2/3, 0], name: S_up}}]
#       ^^ support.class.element
#                       ^ support.class.element
#                           ^^ entity.name.tag
#                                              ^^^^ entity.name.tag
#                                                    ^^^^ string.unquoted
mesh: {coarse: {divisions: [6, 6, 1]}, fine: {spacing: .1}}
#      ^^^^^^ entity.name.tag
#               ^^^^^^^^^ entity.name.tag
#                           ^ constant.numeric
#                                      ^^^^ entity.name.tag
#                                                      ^^ constant.numeric
`))

  test('a whole file as one flow mapping, with and without quotes', () =>
    colours(`
{lattice: {bravais: cI, a: 5}, points: {Q: [1/4, 0, 0]}, path: Γ – Q | Q – N}
#                   ^^ support.type.bravais
#                              ^^^^^^ entity.name.tag
#                                       ^ entity.name.function.point
#                                           ^ constant.numeric
#                                                        ^^^^ entity.name.tag
#                                                              ^ entity.name.function.point
#                                                                ^ keyword.operator.path
#                                                                    ^ keyword.control.break
#                                                                           ^ punctuation.definition.mapping.end
{"lattice": {"bravais": "cI"}, "path": "Γ – Q"}
#             ^^^^^^^ entity.name.tag
#                        ^^ support.type.bravais
#                                       ^ entity.name.function.point
`))

  test('frames are words, not atoms or points', () =>
    colours(`
frames:
  atoms: conventional
# ^^^^^ entity.name.tag
#        ^^^^^^^^^^^^ support.constant.frame
  points: 2pi/a
# ^^^^^^ entity.name.tag
#         ^^^^^ support.constant.frame
frames: {points: cartesian}
#        ^^^^^^ entity.name.tag
#                ^^^^^^^^^ support.constant.frame
`))

  test('rules and severities', () =>
    colours(`
checks:
  point-outside-zone: off
# ^^^^^^^^^^^^^^^^^^ entity.name.tag.rule
#                     ^^^ support.constant.severity
  mesh-coarse: warn
# ^^^^^^^^^^^ entity.name.tag.rule
#              ^^^^ string.unquoted
`))

  test('the end of a block is the next key that is not further in', () =>
    colours(`
points:
  Q: [0, 0, 1/2]
# ^ entity.name.function.point

# A comment at the margin does not end it.
  R: [1/2, 0, 0]
# ^ entity.name.function.point
mesh:
  fine: {spacing: 0.1}
# ^^^^ entity.name.tag.braggline
`))
})

describe('numbers', () => {
  test('expressions', () =>
    colours(`
lattice:
  a: 2.504(3)
#    ^^^^^ constant.numeric.braggline
#         ^^^ constant.numeric.uncertainty
  c: 1e-3 * sqrt(8/3)^2 # in the file's unit
#    ^^^^ constant.numeric
#         ^ keyword.operator.arithmetic
#           ^^^^ support.function.math
#               ^ punctuation.section.parens
#                    ^ keyword.operator.arithmetic
  b: 2pi/a−alpha
#    ^ constant.numeric
#     ^^ constant.language.pi
#       ^ keyword.operator.arithmetic
#        ^ variable.parameter.lattice
#         ^ keyword.operator.arithmetic
#          ^^^^^ variable.parameter.lattice
  vectors: [[0, a/2, a/2], [a/2, 0, a/2]]
#          ^ punctuation.definition.sequence.begin
#           ^ punctuation.definition.sequence.begin
#               ^ variable.parameter.lattice
`))

  test('what is no expression stays text', () =>
    colours(`
tolerance: 3 apples
#          ^^^^^^^^ string.unquoted
mesh: {divisions: [0x10, sqrtt(2), .inf]}
#                  ^^^^ string.unquoted
#                        ^^^^^^^^ string.unquoted
#                                  ^^^^ string.unquoted
`))

  test('a long run of digits that ends as a word is text', () => {
    const long = `a: ${'1'.repeat(5000)}x`
    expect(tokens([long])[0].at(-1)!.scopes.at(-1)).toBe('string.unquoted.plain.braggline')
  })
})

describe('the path', () => {
  test('labels, joints, breaks and counts', () =>
    colours(`
path: Γ – X'-Σ1 → U |K_1–(60)–Γ # round
#     ^ entity.name.function.point
#       ^ keyword.operator.path
#         ^^ entity.name.function.point
#           ^ keyword.operator.path
#            ^^ entity.name.function.point
#               ^ keyword.operator.path
#                   ^ keyword.control.break
#                    ^^^ entity.name.function.point
#                       ^ keyword.operator.path
#                        ^ punctuation.section.parens
#                         ^^ constant.numeric.steps
#                           ^ punctuation.section.parens
#                            ^ keyword.operator.path
#                             ^ entity.name.function.point
#                                ^^^^^^ comment.line
path: recommended
#     ^^^^^^^^^^^ support.constant.path
`))

  test('over several lines, as a list, quoted, as block text', () =>
    colours(`
path: Γ – X
  | U – K
# ^ keyword.control.break
#   ^ entity.name.function.point
path:
  - Γ – X
# ^ punctuation.definition.block.sequence.item
#   ^ entity.name.function.point
  - "U–L"
#   ^ punctuation.definition.string.begin
#    ^ entity.name.function.point
#     ^ keyword.operator.path
path:
- 'Γ – H'''
#  ^ entity.name.function.point
#      ^^^ entity.name.function.point
#         ^ punctuation.definition.string.end
path: [Γ – X, U – L]
#      ^ entity.name.function.point
#           ^ punctuation.separator
#             ^ entity.name.function.point
path: |
#     ^ keyword.control.flow.block-scalar
  Γ – X
# ^ entity.name.function.point
  X – W
# ^ entity.name.function.point
mesh: {}
#^^^ entity.name.tag
`))

  test('points part of the way', () =>
    colours(`
points:
  M: {between: [Γ, X], at: 0.85}
# ^ entity.name.function.point
#     ^^^^^^^ entity.name.tag
#               ^ entity.name.function.point
#                  ^ entity.name.function.point
#                      ^^ entity.name.tag.braggline
#                          ^^^^ constant.numeric
  "H'":
#  ^^ entity.name.function.point
    between: [Γ, X]
#   ^^^^^^^ entity.name.tag
#             ^ entity.name.function.point
    at: 1/2
#   ^^ entity.name.tag.braggline
  Γ1: [0, 0, 0]
# ^^ entity.name.function.point
`))
})

describe('what YAML adds', () => {
  test('comments that silence a rule', () =>
    colours(`
points:
  Q: [3/4, 0, 0] # braggline: allow point-outside-zone, point-unnamed
#                  ^^^^^^^^^ keyword.other.directive
#                             ^^^^^ keyword.other.directive
#                                   ^^^^^^^^^^^^^^^^^^ entity.name.tag.rule
#                                                       ^^^^^^^^^^^^^ entity.name.tag.rule
# braggline: allow path-misses
# ^^^^^^^^^ keyword.other.directive
#                  ^^^^^^^^^^^ entity.name.tag.rule
  # braggline: all
#  ^^^^^^^^^^^^^^^ comment.line
`))

  test('documents, anchors, aliases, tags', () =>
    colours(`
---
#^^ keyword.control.document
points:
  Q: &q [1/2, 0, 0]
#    ^ punctuation.definition.anchor
#     ^ entity.name.type.anchor
#        ^ constant.numeric
  R: *q
#    ^ punctuation.definition.alias
#     ^ variable.other.alias
lattice: !!map {a: 1}
#        ^^^^^ storage.type.tag-handle
`))

  test('a number sign inside a word is no comment, block text has none', () =>
    colours(`
title: run#7 of # three
#      ^^^^^^^^ string.unquoted.title
#                ^^^^^^ comment.line
title: >-
#      ^^ keyword.control.flow.block-scalar
  one # two: three
#^^^^^^^^^^^^^^^^^ string.unquoted.block
unit: bohr
#     ^^^^ keyword.other.unit
`))
})

describe('half-typed text', () => {
  test('an open bracket ends with its block', () =>
    colours(`
points:
  Q: [1/2, 0,
mesh:
#^^^ entity.name.tag
  divisions: [4, 4
atoms: [Pb: [0
path: Γ – X
#     ^ entity.name.function.point
#       ^ keyword.operator.path
`))

  test('half a value', () =>
    colours(`
unit: angs
#     ^^^^ string.unquoted
lattice:
  brav
# ^^^^ string.unquoted
  a: 1/
#    ^ constant.numeric
#     ^ keyword.operator.arithmetic
  b: sqrt(3
#    ^^^^ support.function.math
#         ^ constant.numeric
path: Γ –(6
#     ^ entity.name.function.point
#       ^ keyword.operator.path
#        ^ punctuation.section.parens
#         ^ constant.numeric.steps
path: Γ –
#       ^ keyword.operator.path
points:
  Q:
# ^ entity.name.function.point
  R
# ^ string.unquoted
`))

  test('wherever the typing stops, the next block has its colour', () => {
    const file = `title: "A 'sheet'" # note
lattice: {bravais: hP, a: sqrt(3)/2, c: 15(2)}
atoms:
  - Mo: [0, 0, 0]
  - S: {at: [1/3, 2/3, 1.5e-1], name: 'S_up'}
points:
  M: {between: ["Γ", K'], at: 0.85}
path: Γ –(60)– M | K' # braggline: allow path-misses
checks: {path-misses: off}
`
    for (let end = 0; end <= file.length; end += 1) {
      const lines = [...file.slice(0, end).split('\n'), 'mesh: {divisions: [4, 4, 1]}']
      const last = tokens(lines).at(-1)!
      expect({ after: lines.at(-2), scope: last[0].scopes.at(-1) }).toEqual({
        after: lines.at(-2),
        scope: 'entity.name.tag.braggline',
      })
    }
  })
})
