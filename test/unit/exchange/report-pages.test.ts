/** The report as Markdown and as a page: whole, and nothing of a file becomes markup, a link or a script in them. */
import { describe, expect, test } from 'vitest'
import { reportHtml } from '../../../server/src/exchange/report-html.ts'
import { reportMarkdown } from '../../../server/src/exchange/report-markdown.ts'
import { fixture, fullReports } from './support.ts'

const lattice = 'lattice: {bravais: cP, a: 4}\n'
const titled = (title: string) => fullReports(`title: ${JSON.stringify(title)}\n${lattice}`)

const ATTACKS = [
  '<script>alert(1)</script>',
  '<img src=x onerror=alert(1)>',
  '</title><script src="https://evil.example/x.js"></script>',
  '"><svg onload=alert(1)>',
  "'onmouseover='alert(1)",
  '<!-- --><iframe src="javascript:alert(1)">',
]

describe('Markdown', () => {
  test.each([
    [
      '<img src=x> [a](http://b) *c* | `d` ![e](f)',
      '# \\<img src=x\\> [a\\](http\\://b) \\*c\\* \\| \\`d\\` \\![e\\](f)',
    ],
    ['see https://evil.example or www.evil.example', '# see https\\://evil.example or www\\.evil.example'],
    ['mail a@evil.example', '# mail a\\@evil.example'],
    ['[a]: javascript:alert(1)', '# [a\\]: javascript:alert(1)'],
    ['[click](command:workbench.action.terminal.new)', '# [click\\](command:workbench.action.terminal.new)'],
    ['$\\href{https://evil.example}{x}$', '# \\$\\\\href{https\\://evil.example}{x}\\$'],
    ['&lt;b&gt;', '# \\&lt;b\\&gt;'],
  ])('of the title %s', (title, line) => {
    expect(reportMarkdown(titled(title)).split('\n')[0]).toBe(line)
  })

  test('a file name cannot begin a list or leave its line', () => {
    const lines = (name: string) => reportMarkdown(fullReports(lattice, name)).split('\n')
    expect(lines('- a.lattice.yaml')[2]).toBe('\\- a.lattice.yaml, document 1')
    expect(lines('1. a.lattice.yaml')[2]).toBe('1\\. a.lattice.yaml, document 1')
    expect(lines('a\n<b>.lattice.yaml')[2]).toBe('a�\\<b\\>.lattice.yaml, document 1')
  })

  test('names of meshes and messages of findings are text too', () => {
    const text = reportMarkdown(
      fullReports(`${lattice}mesh:\n  "<b>x</b>": {divisions: [2, 2, 2]}\n"<i>key": 1\n`),
    )
    expect(text).toContain('## Mesh: \\<b\\>x\\</b\\>')
    expect(text.replace(/\\</g, '')).not.toContain('<')
  })

  test('the figure stands at the end as data, once for each crystal', () => {
    const text = reportMarkdown(fullReports(fixture('meshes')))
    expect(text.match(/^!\[.*\]\[zone-\d\]$/gm)).toHaveLength(2)
    const [, data] = /^\[zone-1\]: data:image\/svg\+xml;base64,(.*)$/m.exec(text)!
    const svg = Buffer.from(data, 'base64').toString('utf8')
    expect(svg).toMatch(/^<svg xmlns="http:\/\/www\.w3\.org\/2000\/svg"/)
    expect(svg).toContain('Γ')
  })

  test('findings are listed by line and rule', () => {
    expect(reportMarkdown(fullReports(fixture('draft')))).toMatch(
      /^\| \d+ \| error \| .*J is not defined.* \| path-label-unknown \|$/m,
    )
  })
})

describe('the page', () => {
  test.each(ATTACKS)('of the title %s has no element of its own', attack => {
    const safe = reportHtml(titled('nothing'))
    const page = reportHtml(titled(attack))
    const tags = (html: string) => [...html.matchAll(/<[a-z!/][^>]*>/gi)].map(([tag]) => tag)
    expect(tags(page)).toEqual(tags(safe))
  })

  test('file names, meshes and keys are text too', () => {
    const text = `${lattice}mesh:\n  "<script>": {divisions: [2, 2, 2]}\n"<script>key": 1\n`
    const page = reportHtml(fullReports(text, '<script>.lattice.yaml'))
    expect(page).not.toMatch(/<script/i)
    expect(page).toContain('Mesh: &#60;script&#62;')
  })

  test('needs nothing else: no script, no address that a browser would fetch', () => {
    const page = reportHtml(fullReports(fixture('silicon')))
    expect(page).not.toMatch(/<script|javascript:|\ssrc=|\shref=|url\(|@import/i)
    expect(page.match(/https?:\/\/[^"\s]*/g)).toEqual(['http://www.w3.org/2000/svg'])
    expect(page).toContain("default-src 'none'")
  })

  test('every element that is opened is closed', () => {
    const page = reportHtml(fullReports(fixture('draft')))
    const open: string[] = []
    for (const [, slash, name, self] of page.matchAll(/<(\/?)([a-z][a-z0-9]*)\b[^>]*?(\/?)>/gi)) {
      if (self || name === 'meta') continue
      if (slash) expect(open.pop()).toBe(name)
      else open.push(name)
    }
    expect(open).toEqual([])
  })

  test('holds a figure and an article for each crystal', () => {
    const page = reportHtml(fullReports(fixture('meshes')))
    expect(page.match(/<article>/g)).toHaveLength(2)
    expect(page.match(/<svg /g)).toHaveLength(2)
  })
})
