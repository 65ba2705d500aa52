/** Hints and lenses: what stands beside the text. */
import { describe, expect, test } from 'vitest'
import { codeLenses, resolveLens } from '../../../server/src/language/code-lens.ts'
import { type HintData, inlayHints, resolveHint } from '../../../server/src/language/inlay-hints.ts'
import { snapshotOf } from '../checks/harness.ts'

const ALL = { pathLengths: true, zoneNumbers: true, meshCounts: true, volume: true }

/** The text with each hint in brackets where it stands. */
function hinted(text: string, shown = ALL): string {
  const snapshot = snapshotOf(text)
  const range = { start: { line: 0, character: 0 }, end: snapshot.positionOf(text.length) }
  return inlayHints(snapshot, 'file:///x', range, shown)
    .map(({ position, label }) => ({ at: snapshot.offsetOf(position), label }))
    .sort((a, b) => b.at - a.at)
    .reduce((marked, { at, label }) => `${marked.slice(0, at)}⟦${label}⟧${marked.slice(at)}`, text)
}

function explained(text: string): string[] {
  const snapshot = snapshotOf(text)
  const range = { start: { line: 0, character: 0 }, end: snapshot.positionOf(text.length) }
  return inlayHints(snapshot, 'file:///x', range, ALL).map(hint =>
    String(resolveHint(snapshot, hint, hint.data as HintData, ALL).tooltip),
  )
}

// Simple cubic, a = 4 Å: V = 64 Å³; Γ–X = π/4 = 0.7854 Å⁻¹; X–M the same; Γ–M = √2 π/4 = 1.1107, M–R = 0.7854 (closed
// formulas). (0.75, 0, 0) lies beyond one wall: 2nd zone. The 4 × 4 × 4 mesh of m-3m has 10 irreducible points: those
// of a mesh of n = 4 with k = 0, 1, 2 steps, C(3 + 2, 3) = 10 (counting of multisets).
const CUBIC = `lattice:
  bravais: cP
  a: 4
points:
  Q: [0.75, 0, 0]
path: Γ – X – M | M – R
mesh:
  coarse: {divisions: [4, 4, 4]}
`

describe('hints', () => {
  test('volume, zone, lengths of pieces, counts of a mesh', () =>
    expect(hinted(CUBIC)).toBe(`lattice:⟦volume 64 Å³⟧
  bravais: cP
  a: 4
points:
  Q: [0.75, 0, 0]⟦zone 2⟧
path: Γ – X – M⟦1.571 Å⁻¹⟧ | M – R⟦0.785 Å⁻¹⟧
mesh:
  coarse: {divisions: [4, 4, 4]⟦64, 10 irreducible⟧}
`))

  test('each kind can be turned off', () => {
    expect(hinted(CUBIC, { pathLengths: false, zoneNumbers: false, meshCounts: false, volume: false })).toBe(
      CUBIC,
    )
    expect(hinted(CUBIC, { ...ALL, volume: false })).not.toContain('volume')
  })

  test('are explained when they are looked at', () =>
    expect(explained(CUBIC)).toEqual([
      'Volume of the primitive cell: 64 Å³.',
      'Q: outside by 0.3927 Å⁻¹, in the 2nd zone; folded [-1/4, 0, 0], length 0.3927 Å⁻¹.',
      'Γ – X – M: 2 segments, 1.5708 Å⁻¹ long.',
      'M – R: 1 segment, 0.7854 Å⁻¹ long.',
      '4 × 4 × 4 = 64 k-points, 10 of them irreducible.',
    ]))

  test('a path of one piece has its length in the lens', () =>
    expect(hinted('lattice: {bravais: cP, a: 4}\npath: Γ – X\n', { ...ALL, volume: false })).toBe(
      'lattice: {bravais: cP, a: 4}\npath: Γ – X\n',
    ))

  test('a plane has an area', () =>
    expect(hinted('lattice: {bravais: tp, a: 4}\n')).toBe('lattice: {bravais: tp, a: 4}⟦area 16 Å²⟧\n'))

  test('of a text that has moved on are not explained', () => {
    const snapshot = snapshotOf(CUBIC)
    const hint = { position: { line: 0, character: 0 }, label: 'volume 64 Å³' }
    expect(resolveHint(snapshot, hint, { uri: '', version: 9, index: 0 }, ALL)).toEqual(hint)
  })

  test('are short', () => {
    const labels = hinted(
      'lattice: {bravais: cP, a: 4e-3}\npoints: {Q: [99.5, 77, 0]}\nmesh: {divisions: [4000, 4000, 3000]}\n',
    ).match(/(?<=⟦)[^⟧]*/g)!
    expect(labels).toHaveLength(3)
    for (const label of labels) expect(label.length, label).toBeLessThanOrEqual(24)
  })
})

/** Titles and commands by line. */
function lenses(text: string, commands = false): string[] {
  const snapshot = snapshotOf(text)
  return codeLenses(snapshot, 'file:///x', commands).map(lens => {
    const { range, command } = lens.command ? lens : resolveLens(snapshot, lens, lens.data, commands)
    return `${range.start.line}: ${command!.title}${command!.command ? ` → ${command!.command}` : ''}`
  })
}

describe('lenses', () => {
  // Spacing 0.02 Å⁻¹ by default: ⌈0.7854/0.02⌉ = 40 steps for each of the three segments, 41 + 40 + 41 points.
  test('say what path and mesh come to', () =>
    expect(lenses(CUBIC)).toEqual([
      '5: 2.3562 Å⁻¹ in 3 segments · 122 points',
      '6: coarse: 4 × 4 × 4 = 64, 10 irreducible',
    ]))

  // Doubled along each axis, all k with halves land on Γ: Γ, X, M, R of the cube (closed formula).
  test('say what of a supercell lands on Γ', () =>
    expect(lenses('lattice: {bravais: cP, a: 4}\nsupercell: [2, 2, 2]\n')).toEqual([
      '1: det 8 · 8 k-points on Γ, among them Γ, M, R, X',
    ]))

  // Doubled along c alone: of the three X only (0, 0, 1/2) does.
  test('count every arm of a star', () =>
    expect(lenses('lattice: {bravais: cP, a: 4}\nsupercell: [1, 1, 2]\n')).toEqual([
      '1: det 2 · 2 k-points on Γ, among them Γ, X',
    ]))

  test('open something where the client has the commands', () =>
    expect(
      lenses(
        'lattice: {bravais: cP, a: 4}\npath: Γ – X\nsupercell: [[0, 1, 0], [1, 0, 0], [0, 0, 1]]\n',
        true,
      ),
    ).toEqual([
      '1: 0.7854 Å⁻¹ in 1 segment · 41 points → braggline.openZoneView',
      '1: write the recommended path → braggline.insertRecommendedPath',
      '2: det −1 · another choice of the same cell → braggline.openReport',
    ]))

  test('do not offer the path that is there', () =>
    expect(lenses('lattice: {bravais: cP, a: 4}\npath: recommended\n', true)).toEqual([
      expect.stringMatching(/^1: .* points → braggline\.openZoneView$/),
    ]))

  test('say so where nothing is known', () =>
    expect(
      lenses('lattice: {bravais: cP}\npath: Γ – X\nmesh: {divisions: [2, 2, 2]}\nsupercell: [2, 2, 2]\n'),
    ).toEqual([
      '1: no point of this path is known yet',
      '2: not known yet',
      '3: the supercell is not known yet',
    ]))
})
