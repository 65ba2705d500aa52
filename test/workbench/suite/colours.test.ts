import * as assert from 'node:assert'
import { closeAll, open, set } from './support.ts'
import { Window } from './window.ts'

/**
 * What VS Code's own dark and light themes say of these kinds (their files dark_plus.json, dark_vs.json, light_plus.json
 * and light_vs.json).
 */
const THEMES = {
  'Default Dark Modern': {
    key: '#569CD6',
    number: '#B5CEA8',
    text: '#CE9178',
    point: '#DCDCAA',
    kind: '#4EC9B0',
    halt: '#C586C0',
  },
  'Default Light Modern': {
    key: '#800000',
    number: '#098658',
    text: '#A31515',
    point: '#795E26',
    kind: '#267F99',
    halt: '#AF00DB',
  },
}
const SAMPLES = {
  key: ['title', 'unit', 'bravais', 'frames'],
  number: ['12.1', '40', '0.1', 'bohr'],
  text: ['Every kind of word', 'primitive', 'off'],
  point: ['Q', 'Γ', 'M', 'K'],
  kind: ['hP', 'B', 'N'],
  halt: ['|'],
} as const

const rgb = (hex: string) =>
  `rgb(${[1, 3, 5].map(at => Number.parseInt(hex.slice(at, at + 2), 16)).join(', ')})`

describe('colours without the server', () => {
  let window: Window

  before(async function () {
    const connected = await Window.connect()
    if (!connected) return this.skip()
    window = connected
    // All that a server could add to the colours.
    await set('editor', 'semanticHighlighting.enabled', false)
  })
  after(async () => {
    await window?.close()
    await set('editor', 'semanticHighlighting.enabled', undefined)
    await set('workbench', 'colorTheme', undefined)
    await closeAll()
  })

  for (const [theme, colours] of Object.entries(THEMES)) {
    it(theme, async () => {
      await set('workbench', 'colorTheme', theme)
      await open('colours.lattice.yaml')
      await window.page.waitForFunction(
        ([colour]) =>
          [...document.querySelectorAll('.editor-instance .view-line > span > span')].some(
            span => span.textContent === 'title' && getComputedStyle(span).color === colour,
          ),
        [rgb(colours.key)],
      )
      const drawn = await window.drawn()
      for (const [kind, samples] of Object.entries(SAMPLES)) {
        for (const sample of samples) {
          const piece = drawn.find(({ text }) => text === sample)
          assert.strictEqual(piece?.colour, rgb(colours[kind as keyof typeof colours]), `${kind} ${sample}`)
        }
      }
    })
  }
})
