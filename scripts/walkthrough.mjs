// node scripts/walkthrough.mjs : draws media/walkthrough/*.svg, in the colours of the reader's theme, with the figure of our own zone.
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'
import { build } from 'esbuild'

const root = fileURLToPath(new URL('..', import.meta.url))
const bundle = join(root, '.cache', 'walkthrough.mjs')
await build({
  stdin: {
    contents: `export { Snapshot } from './server/src/analysis.ts'
      export { zoneFigure } from './server/src/exchange/figure.ts'
      export { sceneOf } from './server/src/exchange/scene.ts'
      export { Workshop } from './server/src/meaning/workshop.ts'
      export { SAMPLE } from './client/src/sample.ts'`,
    resolveDir: root,
    loader: 'ts',
  },
  outfile: bundle,
  bundle: true,
  platform: 'node',
  format: 'esm',
  packages: 'external',
  logLevel: 'warning',
})
const { SAMPLE, Snapshot, sceneOf, Workshop, zoneFigure } = await import(pathToFileURL(bundle).href)

const WIDTH = 640
const HEIGHT = 400
const INK = 'var(--vscode-foreground)'
const QUIET = 'var(--vscode-descriptionForeground)'
const PAPER = 'var(--vscode-editor-background)'
const RULE = 'var(--vscode-widget-border, var(--vscode-contrastBorder, #8888))'
const KEY = 'var(--vscode-charts-blue)'
const NUMBER = 'var(--vscode-charts-green)'
const PATH = 'var(--vscode-charts-blue)'
const WRONG = 'var(--vscode-editorError-foreground)'
const MONO = 'var(--vscode-editor-font-family, monospace)'
const TEXT = 'var(--vscode-font-family, sans-serif)'

// In attributes, for the editor allows no style of a picture's own.
const escaped = text => text.replace(/[&<>"]/g, c => `&#${c.charCodeAt(0)};`)
const words = (
  x,
  y,
  text,
  { fill = INK, size = 15, font = MONO, weight = 'normal', anchor = 'start' } = {},
) =>
  `<text x="${x}" y="${y}" fill="${fill}" font-weight="${weight}" font-size="${size}" font-family="${font}" text-anchor="${anchor}" xml:space="preserve">${text}</text>`
const span = (fill, text) => `<tspan fill="${fill}">${escaped(text)}</tspan>`
const sheet = (x, y, w, h) =>
  `<rect x="${x}" y="${y}" width="${w}" height="${h}" rx="6" fill="${PAPER}" stroke="${RULE}"/>`

/** A line of a lattice file in colours: keys, then numbers, then the rest. */
function coloured(line) {
  const [, start, key, rest] = /^(\s*(?:- )?)([\w-]+:)?(.*)$/.exec(line)
  const parts = rest.split(/([-+]?\d+(?:[./]\d+)*)/)
  return (
    span(INK, start) +
    (key ? span(KEY, key) : '') +
    parts.map((part, i) => span(i % 2 ? NUMBER : INK, part)).join('')
  )
}

const LINE = 22
const listing = (lines, x, y) => lines.map((line, i) => words(x, y + i * LINE, coloured(line))).join('\n')

const lines = SAMPLE.trimEnd().split('\n')
const mended = SAMPLE.replace('Ww', 'W')
const scene = sceneOf(
  new Snapshot(
    mended,
    new Workshop({ find: () => ({ outcome: { state: 'failed', reason: 'not asked for' } }) }),
  ),
)
/** Drawn as large as its letters ask for, and shown at a part of that. */
const figure = (x, y, size, scale = 1) => {
  const drawn = zoneFigure(scene, { size, colours: { background: 'none', ink: INK, path: PATH, face: INK } })
  const body = drawn.replace(/<\/?svg\b[^>]*>\n|<(title|desc)>.*?<\/\1>\n|<rect [^>]*\/>\n/gs, '')
  return `<g transform="translate(${x} ${y}) scale(${scale})" font-family="Georgia, 'Times New Roman', serif" font-size="15">\n${body}</g>`
}

const texts = JSON.parse(readFileSync(join(root, 'package.nls.json'), 'utf8'))
/** What the walkthrough says of the picture, for those who do not see it. */
const titleOf = name => {
  const [{ steps }] = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8')).contributes.walkthroughs
  const { media } = steps.find(({ media }) => media.svg.endsWith(`/${name}.svg`))
  return texts[media.altText.replaceAll('%', '')]
}

const svg = (name, body) =>
  `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${WIDTH} ${HEIGHT}" width="${WIDTH}" height="${HEIGHT}">\n<title>${escaped(titleOf(name))}</title>\n${body.join('\n')}\n</svg>\n`

const TOP = 52
const at = lines.findIndex(line => line.includes('Ww'))
const before = lines[at].indexOf('Ww')
/** Of the monospaced text, about: the squiggle stands under the word in any such font. */
const COLUMN = 9
const wave = (x, y, n) =>
  `<path d="M${x} ${y}${' q2 -4 4 0 t4 0'.repeat(n)}" fill="none" stroke="${WRONG}" stroke-width="1.6"/>`

const pictures = {
  file: [sheet(20, 20, 600, 360), listing(lines, 44, TOP)],
  finding: [
    sheet(20, 20, 600, 360),
    listing(lines.slice(at - 2, at + 3), 44, 70),
    wave(44 + before * COLUMN, 70 + 2 * LINE + 5, 3),
    sheet(64, 190, 520, 150),
    words(
      84,
      220,
      span(WRONG, 'Ww') + span(INK, ' is not defined under points, and the label book has no such'),
      { font: TEXT },
    ),
    words(84, 242, span(INK, 'label for this lattice (cF: face-centred cubic). Did you mean W?'), {
      font: TEXT,
    }),
    `<line x1="64" x2="584" y1="270" y2="270" stroke="${RULE}"/>`,
    `<circle cx="94" cy="300" r="8" fill="none" stroke="var(--vscode-charts-yellow)" stroke-width="2"/><path d="M90 312h8M91 316h6" stroke="var(--vscode-charts-yellow)" stroke-width="2"/>`,
    words(116, 306, span(PATH, 'Replace by W'), { font: TEXT }),
  ],
  zone: [figure(130, 10, 380)],
  report: [
    sheet(110, 12, 420, 376),
    words(134, 48, span(INK, 'Lead telluride, rock salt'), { font: TEXT, size: 20, weight: 'bold' }),
    words(134, 70, span(QUIET, 'lead-telluride.lattice.yaml'), { font: TEXT, size: 12 }),
    figure(215, 72, 320, 0.6),
    ...[
      ['Bravais type', 'cF, face-centred cubic'],
      ['space group', 'Fm-3m (225)'],
      ['primitive cell', '67.46 Å³'],
      ['path', 'Γ – X – W – K – Γ – L | U – X'],
      ['mesh', '12 × 12 × 12'],
    ].flatMap(([name, value], i) => [
      words(134, 286 + i * 20, span(QUIET, name), { font: TEXT, size: 13 }),
      words(250, 286 + i * 20, span(INK, value), { font: TEXT, size: 13 }),
    ]),
  ],
  vectors: [
    sheet(20, 70, 250, 250),
    words(40, 104, span(QUIET, 'any program'), { font: TEXT, size: 13 }),
    ...['vectors (Å)', ' 0.000  3.231  3.231', ' 3.231  0.000  3.231', ' 3.231  3.231  0.000'].map(
      (line, i) => words(40, 150 + i * 30, coloured(line), { size: 15 }),
    ),
    `<path d="M290 195h46m-14 -12l14 12l-14 12" fill="none" stroke="${PATH}" stroke-width="3"/>`,
    sheet(356, 70, 264, 250),
    words(376, 104, span(QUIET, 'lattice file'), { font: TEXT, size: 13 }),
    listing(
      [
        'lattice:',
        '  bravais: cF',
        '  a: 6.462',
        '  vectors:',
        '    - [0, a/2, a/2]',
        '    - [a/2, 0, a/2]',
        '    - [a/2, a/2, 0]',
      ],
      376,
      140,
    ),
  ],
}

const folder = join(root, 'media', 'walkthrough')
mkdirSync(folder, { recursive: true })
for (const [name, body] of Object.entries(pictures)) {
  const text = svg(name, body)
  const path = join(folder, `${name}.svg`)
  writeFileSync(path, text)
  console.log(`${path}: ${readFileSync(path).length} bytes`)
}
