import { afterEach, beforeAll, describe, expect, test } from 'vitest'
import type {
  CodeAction,
  CompletionItem,
  DocumentSymbol,
  Hover,
  TextDocumentEdit,
  TextEdit,
} from 'vscode-languageserver-protocol/node'
import { existsSync } from 'node:fs'
import { CLI, Client, MODERN, marked, PLAIN } from './client.ts'

beforeAll(() => {
  if (!existsSync(CLI)) throw new Error(`${CLI} is missing: run \`npm run build\` first`)
})

let client: Client | undefined
afterEach(async () => {
  await client?.stop()
  client = undefined
})

const OUTSIDE =
  'lattice: {bravais: cF, a: 5.43}\npoints:\n  Q: [0.9, 0, 0]\npath: Γ – X\nchecks: {path-misses: off}\n'

describe('findings', () => {
  test('a client that pulls gets them when it asks, and none are pushed', async () => {
    client = await Client.start(MODERN)
    await client.open(OUTSIDE)
    const found = await client.pull()
    expect(found.map(({ code, range }) => ({ code, range }))).toEqual([
      {
        code: 'point-outside-zone',
        range: { start: { line: 2, character: 5 }, end: { line: 2, character: 16 } },
      },
    ])
    expect(client.pushed).toEqual([])
  })

  test('an unchanged text is answered as unchanged', async () => {
    client = await Client.start(MODERN)
    await client.open(OUTSIDE)
    const first = await client.request<{ kind: string; resultId: string }>('textDocument/diagnostic')
    const second = await client.request<{ kind: string }>('textDocument/diagnostic', {
      previousResultId: first.resultId,
    })
    expect([first.kind, second.kind]).toEqual(['full', 'unchanged'])
  })

  test('a client that cannot pull gets them pushed with the version, and cleared on closing', async () => {
    client = await Client.start(PLAIN)
    await client.open(OUTSIDE)
    expect((await client.pushFor(1)).map(({ code }) => code)).toEqual(['point-outside-zone'])
    await client.change(OUTSIDE.replace('0.9', '0.1'))
    expect(await client.pushFor(2)).toEqual([])
    await client.connection.sendNotification('textDocument/didClose', { textDocument: { uri: client.uri } })
    await client.request('textDocument/hover', { position: { line: 0, character: 0 } })
    expect(client.pushed.at(-1)).toEqual({ uri: client.uri, diagnostics: [] })
  })

  test('the workspace may change the severity of a rule', async () => {
    client = await Client.start(MODERN, { checks: { 'point-outside-zone': 'error' } })
    await client.open(OUTSIDE)
    await client.request('braggline/checked', { uri: client.uri, version: 1 })
    expect((await client.pull())[0].severity).toBe(1)
  })

  test('`braggline/checked` counts the findings of the version asked for', async () => {
    client = await Client.start(MODERN)
    await client.open(OUTSIDE)
    expect(await client.connection.sendRequest('braggline/checked', { uri: client.uri, version: 1 })).toEqual(
      {
        version: 1,
        findings: 1,
      },
    )
  })
})

describe('hover', () => {
  const hoverAt = async (source: string) => {
    const { text, position } = marked(source)
    client = await Client.start(MODERN)
    await client.open(text)
    const answer = await client.request<Hover | null>('textDocument/hover', { position })
    return answer && (answer.contents as { value: string }).value
  }

  test('on `lattice`: the reciprocal vectors with their lengths', async () => {
    // |b| = 2π√3/a for the face-centred cubic lattice (common practice): 2.0042 Å⁻¹ with a = 5.43 Å.
    const text = await hoverAt('latt$0ice: {bravais: cF, a: 5.43}\n')
    expect(text).toContain('b₁')
    expect(text).toContain('2.0042')
  })

  test('on a k-point: its place and length', async () => {
    // |ΓX| = 2π/a = 1.1571 Å⁻¹.
    const text = await hoverAt('lattice: {bravais: cF, a: 5.43}\npoints:\n  Q: [1/2, 0, 1/2$0]\n')
    expect(text).toContain('1.1571')
    expect(text).toContain('boundary')
  })

  test('between two labels: the length of the segment', async () => {
    const text = await hoverAt('lattice: {bravais: cF, a: 5.43}\npath: Γ –$0 X\n')
    expect(text).toContain('1.1571 Å⁻¹')
  })

  test('nothing where there is nothing to say', async () => {
    expect(await hoverAt('lattice: {bravais: cF, a: 5.43}\n\n$0\n# a comment\n')).toBeNull()
  })
})

describe('completion', () => {
  const itemsAt = async (source: string) => {
    const { text, position } = marked(source)
    client = await Client.start(MODERN)
    await client.open(text)
    return client.request<CompletionItem[]>('textDocument/completion', { position })
  }
  const CELL = 'lattice: {bravais: cP, a: 4}\n'

  test('an empty path is offered the book’s own, by name and written out', async () => {
    const [byName, inFull] = await itemsAt(`${CELL}path: $0`)
    expect(byName.label).toBe('recommended')
    // Setyawan and Curtarolo 2010, simple cubic (from memory, as all paths of the books).
    expect((inFull.textEdit as TextEdit).newText).toBe('Γ – X – M – Γ – R – X | M – R')
  })

  test('after a separator the labels come with the length of the step', async () => {
    const items = await itemsAt(`${CELL}path: Γ – $0`)
    // |ΓM| = √2 π/a = 1.1107 Å⁻¹.
    expect(items.find(({ label }) => label === 'M')?.detail).toBe('[1/2, 1/2, 0], 1.1107 Å⁻¹ from Γ')
    expect(items.map(({ label }) => label)).not.toContain('recommended')
  })

  test('keys that are there are not offered again', async () => {
    const labels = (await itemsAt(`${CELL}p$0\n`)).map(({ label }) => label)
    expect(labels).toContain('path')
    expect(labels).not.toContain('lattice')
  })

  test('in a block its own keys, after a key the words that it takes', async () => {
    expect((await itemsAt('lattice:\n  $0\n')).map(({ label }) => label)).toContain('bravais')
    await client?.stop()
    expect((await itemsAt('unit: $0\n')).map(({ label }) => label)).toEqual(['angstrom', 'nm', 'bohr'])
  })
})

describe('fixes', () => {
  test('the fix of a finding is offered on it, tied to it, for the version at hand', async () => {
    client = await Client.start(MODERN)
    await client.open('lattice: {bravais: cF, a: 5.43}\npaths: Γ – X\n')
    const [finding] = await client.pull()
    const actions = await client.request<CodeAction[]>('textDocument/codeAction', {
      range: finding.range,
      context: { diagnostics: [finding] },
    })
    const [fix] = actions
    expect(fix.diagnostics).toEqual([finding])
    const [{ textDocument, edits }] = fix.edit!.documentChanges as TextDocumentEdit[]
    expect(textDocument.version).toBe(1)
    expect(edits).toEqual([{ range: finding.range, newText: 'path' }])
  })

  test('"fix all" needs no finding to be shown', async () => {
    client = await Client.start(MODERN)
    await client.open(
      'lattice: {bravais: hP, a: 3, c: 5}\npoints:\n  K: [0.333, 0.333, 0]\npath: recommended\n',
    )
    const actions = await client.request<CodeAction[]>('textDocument/codeAction', {
      range: { start: { line: 0, character: 0 }, end: { line: 0, character: 0 } },
      context: { diagnostics: [], only: ['source.fixAll'] },
    })
    expect(actions.map(({ kind }) => kind)).toEqual(['source.fixAll.braggline'])
    const [{ edits }] = actions[0].edit!.documentChanges as TextDocumentEdit[]
    expect(edits.map(edit => (edit as { newText: string }).newText).join(' ')).toContain('1/3')
  })
})

test('the outline holds the parts in the order of the text', async () => {
  client = await Client.start(MODERN)
  await client.open(
    'title: T\nlattice: {bravais: cF, a: 5.43}\natoms:\n  - Si: [0, 0, 0]\npath: Γ – X | Γ – L\n',
  )
  const outline = await client.request<DocumentSymbol[]>('textDocument/documentSymbol')
  expect(outline.map(({ name, detail }) => [name, detail])).toEqual([
    ['title', 'T'],
    ['lattice', 'cF'],
    ['atoms', '1 atom'],
    ['path', undefined],
  ])
  expect(outline[3].children!.map(({ name }) => name)).toEqual(['Γ – X', 'Γ – L'])
})

describe('the server survives', () => {
  test('requests for a file that it does not know', async () => {
    client = await Client.start(MODERN)
    expect(await client.request('textDocument/hover', { position: { line: 5, character: 5 } })).toBeNull()
    expect(await client.pull()).toEqual([])
  })

  test('positions outside the text', async () => {
    client = await Client.start(MODERN)
    await client.open('lattice: {bravais: cF, a: 5.43}')
    expect(await client.request('textDocument/hover', { position: { line: 99, character: 99 } })).toBeNull()
  })

  test.each([
    ['nothing', ''],
    ['no YAML', '\t: {[\u0000'],
    ['deep nesting', '['.repeat(5000)],
    [
      'an alias bomb',
      `a: &a [1]\n${Array.from({ length: 30 }, (_, i) => `${'b'.repeat(i + 1)}: &x${i} [${i ? `*x${i - 1}, *x${i - 1}` : '*a, *a'}]`).join('\n')}\n`,
    ],
    [
      'conflict markers',
      '<<<<<<< HEAD\nlattice: {bravais: cF, a: 5}\n=======\nlattice: {bravais: cI, a: 5}\n>>>>>>> other\n',
    ],
  ])('%s', async (_, text) => {
    client = await Client.start(MODERN)
    await client.open(text)
    expect(Array.isArray(await client.pull())).toBe(true)
    await client.change('lattice: {bravais: cF, a: 5.43}\n')
    expect(await client.pull()).toEqual([])
  })

  test('it ends with code 0 when it is asked to', async () => {
    const once = await Client.start(MODERN)
    expect(await once.stop()).toBe(0)
  })
})

describe('the zone view', () => {
  const CUBIC = 'lattice: {bravais: cF, a: 5.43}\npath: Γ – X\n'
  const ask = <R>(method: string, params: object = {}) =>
    client!.connection.sendRequest<R>(`braggline/${method}`, { uri: client!.uri, version: 1, ...params })

  test('is given the picture and the bands of a version', async () => {
    client = await Client.start(MODERN)
    await client.open(CUBIC)
    const answer = await ask<{
      version: number
      scene: { zone: { faces: unknown[] } }
      documents: unknown[]
    }>('scene')
    expect(answer.version).toBe(1)
    expect(answer.scene.zone.faces).toHaveLength(14)
    expect(answer.documents).toHaveLength(1)
    const { bands } = await ask<{ bands: { ticks: unknown[] } }>('bands')
    expect(bands.ticks).toHaveLength(2)
    const { solid } = await ask<{ solid: { faces: unknown[] } }>('zoneSolid', { n: 2 })
    expect(solid.faces.length).toBeGreaterThan(14)
    for (const kind of ['zone', 'bands'])
      expect((await ask<{ svg: string }>('figure', { kind, view: [60, 30] })).svg).toMatch(/^<svg /)
  })

  test('is told why there is no picture', async () => {
    client = await Client.start(MODERN)
    await client.open('lattice: {bravais: cF, a: six}\n')
    expect(await ask('scene')).toMatchObject({ scene: null, reason: expect.stringContaining('six') })
    expect(await ask('bands')).toEqual({ version: 1, bands: null })
    expect(await ask('figure', { kind: 'zone' })).toEqual({ version: 1, svg: null })
  })

  test('writes into the version that it shows, and into no other', async () => {
    client = await Client.start(MODERN)
    await client.open(CUBIC)
    const labels = { labels: ['W'], newPiece: false }
    const end = { line: 1, character: 11 }
    expect(await ask('appendToPath', labels)).toEqual({
      version: 1,
      edits: [{ range: { start: end, end }, newText: ' – W' }],
    })
    expect(await ask('appendToPath', { ...labels, version: 0 })).toBeNull()
  })

  test('asks of a file that is not open in vain', async () => {
    client = await Client.start(MODERN)
    expect(await ask('scene', { uri: 'file:///gone.lattice.yaml' })).toBeNull()
  })
})
