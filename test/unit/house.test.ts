/** Arrows between the rooms run one way. */
import { readdirSync, readFileSync, statSync } from 'node:fs'
import { dirname, join, relative } from 'node:path'
import { fileURLToPath } from 'node:url'
import { describe, expect, test } from 'vitest'

const ROOT = fileURLToPath(new URL('../..', import.meta.url))

const MAY_USE: Record<string, readonly string[]> = {
  'server/src/crystal': [],
  'server/src/books': ['server/src/crystal'],
  'server/src/format': ['server/src/crystal'],
  'server/src/meaning': ['server/src/crystal', 'server/src/books', 'server/src/format'],
  'server/src/checks': ['server/src/crystal', 'server/src/books', 'server/src/format', 'server/src/meaning'],
  'server/src/exchange': [
    'server/src/crystal',
    'server/src/books',
    'server/src/format',
    'server/src/meaning',
    'server/src/analysis.ts',
    'server/src/protocol.ts',
  ],
  'server/src/language': [
    'server/src/crystal',
    'server/src/books',
    'server/src/format',
    'server/src/meaning',
    'server/src/exchange',
    'server/src/analysis.ts',
    'server/src/protocol.ts',
  ],
  'client/src': ['server/src/protocol.ts', 'client/messages.ts'],
  'client/view': ['server/src/protocol.ts', 'client/messages.ts'],
}
/** Rooms that run in a browser too: no module of Node, no library but those named. */
const LIBRARIES: Record<string, readonly string[]> = {
  'server/src/crystal': ['@spglib/moyo-wasm'],
  'server/src/books': [],
  'server/src/format': ['yaml'],
  'server/src/meaning': [],
  'server/src/checks': [],
  'server/src/language': ['vscode-languageserver-types'],
}

const files = (folder: string): string[] =>
  readdirSync(join(ROOT, folder)).flatMap(name => {
    const path = join(folder, name)
    return statSync(join(ROOT, path)).isDirectory() ? files(path) : path.endsWith('.ts') ? [path] : []
  })

const roomOf = (path: string) =>
  Object.keys(MAY_USE).find(room => path === room || path.startsWith(`${room}/`)) ?? path

const imports = ['server/src', 'client']
  .flatMap(files)
  .flatMap(file =>
    [
      ...readFileSync(join(ROOT, file), 'utf8').matchAll(
        /^(?:import|export)\b[^'"]*?\bfrom '([^']+)'|^import '([^']+)'/gms,
      ),
    ].map(([, from, bare]) => ({ file, target: from ?? bare })),
  )

describe('imports', () => {
  test('are found', () => expect(imports.length).toBeGreaterThan(50))

  test('go to rooms below only', () => {
    const wrong = imports.filter(({ file, target }) => {
      const room = roomOf(file)
      if (!target.startsWith('.') || !(room in MAY_USE)) return false
      const to = roomOf(relative(ROOT, join(ROOT, dirname(file), target)))
      return to !== room && !MAY_USE[room].includes(to)
    })
    expect(wrong).toEqual([])
  })

  test('of libraries are those that the room may use', () => {
    const wrong = imports.filter(({ file, target }) => {
      const allowed = LIBRARIES[roomOf(file)]
      return allowed !== undefined && !target.startsWith('.') && !allowed.includes(target)
    })
    expect(wrong).toEqual([])
  })

  test('never run in a circle', () => {
    const edges = new Map<string, string[]>()
    for (const { file, target } of imports) {
      if (!target.startsWith('.')) continue
      edges.set(file, [...(edges.get(file) ?? []), relative(ROOT, join(ROOT, dirname(file), target))])
    }
    const done = new Set<string>()
    const circles: string[] = []
    const visit = (file: string, path: string[]) => {
      if (path.includes(file)) circles.push([...path.slice(path.indexOf(file)), file].join(' → '))
      if (done.has(file) || path.includes(file)) return
      for (const next of edges.get(file) ?? []) visit(next, [...path, file])
      done.add(file)
    }
    for (const file of edges.keys()) visit(file, [])
    expect(circles).toEqual([])
  })
})
