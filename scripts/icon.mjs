// node scripts/icon.mjs : draws media/icon.svg and media/icon.png, the first zone of the face-centred cubic lattice with a path in it.
import { existsSync, writeFileSync } from 'node:fs'
import { delimiter, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { chromium } from 'playwright-core'

const SIZE = 128
const AZIMUTH = 24
const ELEVATION = 17
/** Pixels for one unit; the corners of the zone lie √5 units from its centre. */
const SCALE = 23.5
const INK = {
  ground: ['#22345c', '#101a30'],
  face: ['#9cc4ff', '#5b8de0', '#3c64b4'],
  edge: '#dbe8ff',
  hidden: '#7f9bd1',
  path: '#ffb454',
}

const radians = degrees => (degrees * Math.PI) / 180
const [ca, sa] = [Math.cos(radians(AZIMUTH)), Math.sin(radians(AZIMUTH))]
const [ce, se] = [Math.cos(radians(ELEVATION)), Math.sin(radians(ELEVATION))]
/** Across, up and towards the eye. */
const turned = ([x, y, z]) => [
  -sa * x + ca * y,
  ce * z - se * (ca * x + sa * y),
  ce * (ca * x + sa * y) + se * z,
]
const onPage = p => {
  const [across, up] = turned(p)
  return [SIZE / 2 + SCALE * across, SIZE / 2 - SCALE * up]
}
const dot = (p, q) => p[0] * q[0] + p[1] * q[1] + p[2] * q[2]

// Corners of the truncated octahedron: all orders and signs of (0, 1, 2).
const signs = [-1, 1]
const corners = [
  [0, 1, 2],
  [0, 2, 1],
  [1, 0, 2],
  [1, 2, 0],
  [2, 0, 1],
  [2, 1, 0],
].flatMap(order =>
  signs.flatMap(s => signs.map(t => order.map(n => (n === 1 ? s * n : n === 2 ? t * n : 0)))),
)
const square = [0, 1, 2].flatMap(axis =>
  signs.map(s => ({ normal: [0, 1, 2].map(i => (i === axis ? s : 0)), height: 2 })),
)
const hexagon = signs.flatMap(s => signs.flatMap(t => signs.map(u => ({ normal: [s, t, u], height: 3 }))))
const faces = [...square, ...hexagon].map(({ normal, height }) => ({
  visible: turned(normal)[2] > 0,
  light: turned(normal)[2] / Math.hypot(...normal) + 0.35 * (turned(normal)[1] / Math.hypot(...normal)),
  ring: around(
    normal,
    corners.filter(corner => dot(corner, normal) === height),
  ),
}))

/** The corners of a face in order. */
function around(normal, ring) {
  const first = ring[0]
  const length = Math.hypot(...normal)
  const centre = [0, 1, 2].map(i => ring.reduce((sum, p) => sum + p[i], 0) / ring.length)
  const u = first.map((x, i) => x - centre[i])
  const n = normal.map(x => x / length)
  const v = [n[1] * u[2] - n[2] * u[1], n[2] * u[0] - n[0] * u[2], n[0] * u[1] - n[1] * u[0]]
  const angle = p =>
    Math.atan2(
      dot(
        p.map((x, i) => x - centre[i]),
        v,
      ),
      dot(
        p.map((x, i) => x - centre[i]),
        u,
      ),
    )
  return [...ring].sort((p, q) => angle(p) - angle(q))
}

const text = points =>
  points
    .map(p =>
      onPage(p)
        .map(x => x.toFixed(1))
        .join(','),
    )
    .join(' ')
const outline = (ring, attributes) => `<polygon points="${text(ring)}" ${attributes}/>`
const shade = light => INK.face[light > 0.95 ? 0 : light > 0.6 ? 1 : 2]

// Γ – X – W – L – Γ on the faces that look at the eye.
const path = [
  [0, 0, 0],
  [2, 0, 0],
  [2, 0, 1],
  [1, 1, 1],
  [0, 0, 0],
]
const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="${SIZE}" height="${SIZE}" viewBox="0 0 ${SIZE} ${SIZE}">
<defs><linearGradient id="ground" x1="0" y1="0" x2="0" y2="1"><stop offset="0" stop-color="${INK.ground[0]}"/><stop offset="1" stop-color="${INK.ground[1]}"/></linearGradient></defs>
<rect width="${SIZE}" height="${SIZE}" rx="26" fill="url(#ground)"/>
<g stroke-linejoin="round" stroke-linecap="round">
${faces
  .filter(face => !face.visible)
  .map(face =>
    outline(face.ring, `fill="none" stroke="${INK.hidden}" stroke-width="1.4" stroke-dasharray="0.1 4"`),
  )
  .join('\n')}
${faces
  .filter(face => face.visible)
  .map(face =>
    outline(
      face.ring,
      `fill="${shade(face.light)}" fill-opacity="0.34" stroke="${INK.edge}" stroke-width="2.4"`,
    ),
  )
  .join('\n')}
<polyline points="${text(path)}" fill="none" stroke="${INK.path}" stroke-width="5"/>
${path
  .slice(0, -1)
  .map(p => onPage(p))
  .map(
    ([x, y]) =>
      `<circle cx="${x.toFixed(1)}" cy="${y.toFixed(1)}" r="5.6" fill="${INK.ground[1]}" stroke="${INK.path}" stroke-width="3.2"/>`,
  )
  .join('\n')}
</g>
</svg>
`

const media = fileURLToPath(new URL('../media/', import.meta.url))
writeFileSync(join(media, 'icon.svg'), svg)
const executablePath = ['chromium', 'chromium-browser', 'google-chrome']
  .flatMap(name => (process.env.PATH ?? '').split(delimiter).map(folder => join(folder, name)))
  .find(existsSync)
const browser = await chromium.launch({ executablePath, args: ['--no-sandbox'] })
const page = await browser.newPage({ viewport: { width: SIZE, height: SIZE } })
await page.setContent(`<style>body{margin:0}svg{display:block}</style>${svg}`)
await page.screenshot({ path: join(media, 'icon.png'), omitBackground: true })
await browser.close()
