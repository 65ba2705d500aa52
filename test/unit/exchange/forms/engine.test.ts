import { describe, expect, test } from 'vitest'
import { demo, fill, LEAD } from './support.ts'

describe('what a form says', () => {
  test.each([
    ['{{ title }}', 'Lead telluride, rock salt'],
    ['{{ stem }} {{ file }} {{ version }} {{ date }}', 'demo demo.lattice.yaml 1.2.3 2026-01-31'],
    ['{{ lattice.vectors[0] | join: "," }}', '0,3.23,3.23'],
    ['{{ lattice.vectors.size }} {{ atoms.first.element }} {{ atoms.last.element }}', '3 Pb Te'],
    ['{{ mesh.name | default: "only" }}', 'only'],
    ['{% if book.doubts %}doubts{% else %}none{% endif %}', 'none'],
    ['{{ atoms | map: "element" | join: "-" }}', 'Pb-Te'],
    ['{{ path.pieces[1] | join: " " }}', 'U X'],
    ['{% raw %}{{ as it is }}{% endraw %}', '{{ as it is }}'],
    ['{% assign n = atoms.size | plus: 1 %}{{ n }}', '3'],
    ['{% for a in atoms %}{{ forloop.index }}{% if forloop.last %}.{% endif %}{% endfor %}', '12.'],
    ['{% for i in (1..3) %}{{ i }}{% endfor %}', '123'],
  ])('%s', (form, expected) => expect(fill(form)).toBe(expected))
})

describe('lines', () => {
  test('one that holds nothing but tags leaves no line behind', () => {
    expect(fill('a\n  {% if title %}\nb\n  {% endif %}  {% comment %}x{% endcomment %}\nc\n')).toBe(
      'a\nb\nc\n',
    )
    expect(fill('{% if title %}\nb\n{% endif %}')).toBe('b\n')
    expect(fill('{% if title %}\r\nb\r\n{% endif %}\r\n')).toBe('b\r\n')
  })
  test('one that holds more stays as it is', () => {
    expect(fill('a {% if title %} b {% endif %} c\n')).toBe('a  b  c\n')
    expect(fill('{{ 1 }} {% if title %}\nb{% endif %}\n')).toBe('1 \nb\n')
    expect(fill('\n\n{{ 1 }}\n\n')).toBe('\n\n1\n\n')
  })
  test('one that writes keeps its indent and its line break; that of a partial does not count twice', () => {
    const partials = { p: 'x\n', q: '{% for i in (1..2) %}\ny{{ i }}\n{% endfor %}\n' }
    expect(fill('[\n  {% render "p" %}\n]', LEAD, { partials })).toBe('[\n  x\n]')
    expect(fill('{% render "q" %}\n[{% render "p" %}]', LEAD, { partials })).toBe('y1\ny2\n[x]')
  })
})

describe('a fault is told with its place, and with what was probably meant', () => {
  test.each([
    ['{{ titel }}', '1:4: there is no `titel`; did you mean `title`?'],
    ['a\n  {{ lattice.vectrs[0] }}', '2:6: there is no `lattice.vectrs`; did you mean `lattice.vectors`?'],
    ['{% for a in atms %}{% endfor %}', '1:13: there is no `atms`; did you mean `atoms`?'],
    [
      '{% for a in atoms %}{{ a.elment }}{% endfor %}',
      '1:24: there is no `a.elment`; did you mean `a.element`?',
    ],
    ['{% for atom in atoms %}{{ atm.element }}{% endfor %}', '1:27: there is no `atm`; did you mean `atom`?'],
    ['{% if mehs %}{% endif %}', '1:7: there is no `mehs`; did you mean `mesh`?'],
    [
      '{{ lattice.vectors[3] }}',
      '1:4: there is no `lattice.vectors[3]`: the list has 3 entries, counted from 0',
    ],
    [
      '{{ lattice.vectors.x }}',
      '1:4: there is no `lattice.vectors.x`: a list has `[0]`, `size`, `first` and `last`',
    ],
    ['{{ title.first }}', '1:4: there is no `title.first`: a word has no parts'],
    ['Γé😀 {{ 1 | fixd: 2 }}', '1:12: there is no filter fixd; did you mean fixed?'],
    ['{% fro a in atoms %}', '1:1: there is no tag fro; did you mean for?'],
    ['{% if title %}', '1:1: tag {% if title %} not closed'],
    ['{{ title', '1:1: output "{{ title" not closed'],
    ['{{ lattice.vectors }}', '1:1: this is a list: go through it with `for`, or use `join`'],
    ['{{ lattice }}', '1:1: this is a group of values: name the one that is meant'],
    ['{{ 1 | width }}', '1:8: a number is needed, and this is nothing'],
  ])('%s', (form, expected) => expect(fill(form)).toBe(`form.liquid:${expected}`))
})

describe('what the lattice file does not give is never written in silence', () => {
  const BARE = 'lattice: {bravais: cP, a: 4}\n'
  test.each([
    ['{{ title }}', '1:1: `title` has no value: the file has no `title`'],
    ['{% echo mesh.points %}', '1:1: `mesh.points` has no value: the file has no mesh'],
    ['{{ mesh.divisions[0] }}', '1:1: `mesh.divisions[0]` has no value: the file has no mesh'],
    ['{% for k in mesh.allPoints %}{% endfor %}', '1:1: `mesh.allPoints` has no value: the file has no mesh'],
    ['{% for p in path.sampled %}{% endfor %}', '1:1: `path.sampled` has no value: the file has no path'],
    ['{% for a in atoms %}{% endfor %}', '1:1: `atoms` has no value: the file has no atoms'],
    ['{{ mesh.points | times: 2 }}', '1:18: a number is needed, and this is nothing'],
    ['{{ 2 | times: mesh.points }}', '1:8: a number is needed, and this is nothing'],
    ['{{ title | upcase }}', '1:12: a word or a number is needed, and this is nothing'],
    ['{{ path.segments | size }}', '1:20: there is no value to work on'],
  ])('%s', (form, expected) => expect(fill(form, BARE)).toBe(`form.liquid:${expected}`))
  test('asked first, it is simply not there', () => {
    expect(
      fill('{% if mesh %}x{% endif %}{% unless path %}y{% endunless %}{{ title | default: "z" }}', BARE),
    ).toBe('yz')
  })
})

describe('a form sees plain data and reaches nothing else', () => {
  test.each([
    ...[
      'constructor',
      '__proto__',
      'toString',
      'prototype',
      'globalThis',
      'process',
      'require',
      'size',
      'forloop',
    ],
    ...[
      'lattice.constructor',
      'lattice.__proto__',
      'title.constructor',
      'atoms.constructor',
      'title.length.x',
    ],
    ...['constructor.constructor', 'lattice["constructor"]', 'lattice["__proto__"]["polluted"]'],
  ])('{{ %s }}', name => expect(fill(`{{ ${name} }}`)).toMatch(/^form.liquid:1:\d+: there is no /))

  test('nor through a loop, a filter or an assignment', () => {
    const inLoop = (what: string) => fill(`{% for i in (1..2) %}{{ forloop.${what} }}{% endfor %}`)
    for (const what of ['constructor', '__proto__', 'toString', 'next', 'name', 'i'])
      expect(inLoop(what)).toMatch(/there is no `forloop/)
    expect(fill('{{ atoms | map: "constructor" | join }}')).toMatch(/^form.liquid:1:/)
    expect(fill('{{ atoms | map: "__proto__" | join }}')).toMatch(/^form.liquid:1:/)
    expect(fill('{% assign __proto__ = "x" %}{{ title }}')).toBe('Lead telluride, rock salt')
    expect(({} as { x?: unknown }).x).toBeUndefined()
  })

  test.each(['capture x', 'layout "x"', 'block x', 'tablerow i in (1..2)'])(
    '{%% %s %%} is no tag here',
    tag => {
      expect(fill(`{% ${tag} %}`)).toMatch(/^form.liquid:1:1: there is no tag /)
    },
  )
  test.each(['date', 'where_exp: "x", "y"', 'url_decode', 'escape', 'json', 'raw', 'base64_decode'])(
    '| %s is no filter here',
    filter => expect(fill(`{{ title | ${filter} }}`)).toMatch(/^form.liquid:1:12: there is no filter /),
  )

  test.each([
    ['../secret', '`..` is refused'],
    ['/etc/passwd', 'absolute path is refused'],
    ['file:///etc/passwd', 'absolute path is refused'],
    ['a/../../b', '`..` is refused'],
    ['./b', 'no name of a partial'],
    ['nowhere', 'there is no partial "nowhere"'],
    ['constructor', 'there is no partial "constructor"'],
  ])('{%% render "%s" %%}', (name, message) => {
    expect(fill(`{% render "${name}" %}`)).toContain(message)
    expect(fill(`{% include "${name}" %}`)).toContain(message)
  })
  test('the name of a partial is no variable', () => {
    expect(fill('{% assign x = "p" %}{% render x %}', LEAD, { partials: { p: 'x' } })).toContain(
      'stands in quotes',
    )
    expect(fill('{% render "{{ title }}" %}')).toContain('stands in quotes')
  })
})

describe('limits', () => {
  const SHORT = { milliseconds: 50, characters: 1000 }
  const limited = (form: string) => fill(form, LEAD, { limits: SHORT })

  test('a loop over a thousand million', () => {
    expect(fill('{% for i in (1..1000000000) %}{% endfor %}')).toMatch(
      /^form.liquid:1:1: .*too long to be held/,
    )
    expect(fill('{% assign x = (1..1000000000) %}')).toMatch(/too long to be held/)
  })
  test('loops in loops', () => {
    const deep = (n: number): string => (n ? `{% for i in (1..9999) %}${deep(n - 1)}{% endfor %}` : '')
    expect(limited(deep(4))).toMatch(/^form.liquid:1:\d+: the form takes longer than 0.05 s/)
  })
  test('a text without end', () => {
    expect(limited('{% for i in (1..9999) %}0123456789{% endfor %}')).toBe(
      'form.liquid:1:25: the text would be longer than 1,000 characters',
    )
  })
  test('a word that doubles', () => {
    for (const filter of ['append: w', 'prepend: w', 'replace: "x", w'])
      expect(
        fill(`{% assign w = "xx" %}{% for i in (1..99) %}{% assign w = w | ${filter} %}{% endfor %}`),
      ).toMatch(/too long to be held|would be longer than 20,000,000/)
  })
  test('a list that doubles', () => {
    const form = '{% assign l = (1..99) %}{% for i in (1..99) %}{% assign l = l | concat: l %}{% endfor %}'
    expect(fill(form)).toMatch(/too long to be held/)
  })
  test('partials in a circle', () => {
    expect(
      fill('{% render "a" %}', LEAD, { partials: { a: '{% include "b" %}', b: '\n{% render "a" %}' } }),
    ).toMatch(/^(a:1|b:2):1: partials name each other more than 16 deep/)
  })
  test('tags within tags without end', () => {
    expect(fill('{% if title %}'.repeat(9_000))).toMatch(/^form.liquid:1:\d+: /)
    expect(fill(`${'{% if title %}'.repeat(5_000)}${'{% endif %}'.repeat(5_000)}`)).toMatch(
      /^form.liquid:1:\d+: |^$/,
    )
  })
  test('a form that is too long', () => {
    expect(fill('x'.repeat(200_001))).toBe('form.liquid:1:1: a form of over 200,000 characters is not read')
  })
  test('lists of k-points are made only where a form names them, and not beyond a limit', () => {
    const huge = `${LEAD.split('mesh:')[0]}mesh:\n  divisions: [200, 200, 200]\n`
    expect(fill('{{ mesh.points }}', huge)).toBe('8000000')
    expect(fill('{{ mesh.allPoints | size }}', huge)).toBe(
      'refused: the form asks for `allPoints`, and the mesh has 8,000,000 points: over 250,000 are not listed',
    )
    const fine = LEAD.replace('spacing: 0.02', 'spacing: 0.00001')
    expect(fill('{{ path.points }}', fine)).toMatch(/^\d{6}$/)
    expect(fill('{{ path.sampled | size }}', fine)).toMatch(/^refused: the form asks for `sampled`/)
  })
})

test('a sheet has a cell to compute in where it states its height', () => {
  // a = 2.5 Å, height 18 Å; atoms at half the height.
  const sheet = demo('sheet.lattice.yaml')
  expect(
    fill(
      '{{ lattice.vectors.size }} {{ lattice.cell[2] | join }} {{ atoms[0].inCell | fraction | join }}',
      sheet,
    ),
  ).toBe('2 0 0 18 1/3 2/3 1/2')
  expect(fill('{{ lattice.cell[2] | join }}', sheet.replace('  height: 18\n', ''))).toMatch(
    /a list is needed/,
  )
})
