/** The demo: clean files give nothing, and each draft's mistake is named on its own characters. */
import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, test } from 'vitest'
import { applyEdits, findingsOf, snapshotOf } from '../unit/checks/harness.ts'

const DEMO = 'demo'
const isLatticeFile = (name: string) => name.endsWith('.lattice.yaml')
const read = (...path: string[]) => readFileSync(join(DEMO, ...path), 'utf8')

describe('clean files', () => {
  test.each(readdirSync(DEMO).filter(isLatticeFile))('%s', name => {
    const { findings } = snapshotOf(read(name))
    expect(findings.map(({ rule, message }) => `${rule}: ${message}`)).toEqual([])
  })
})

/** Draft, then each expected finding as `rule @ the characters it stands on`. */
const DRAFTS: Record<string, readonly string[]> = {
  '01-primitive-fractions-under-conventional-frame': ['point-frame-suspect @ conventional'],
  '02-x-and-w-swapped': ['point-label-mismatch @ [1/2, 1/4, 3/4]', 'point-label-mismatch @ [1/2, 0, 1/2]'],
  '03-point-of-another-ratio': ['point-stale-parameter @ [-0.297259, 0.297259, 0.297259]'],
  '04-thirds-cut-short': ['atom-nearly-special @ [0.333, 0.667, 0]', 'point-rounded @ [0.333, 0.333, 0]'],
  '05-conventional-cell-as-primitive': ['lattice-type-mismatch @ cF'],
  '06-path-retraced': ['path-retraces @ Γ – X1', 'path-retraces @ Γ – X2'],
  '07-left-handed': ['lattice-left-handed @ - [0, 4.2, 0] - [5.1, 0, 0] - [0, 0, 6.3]'],
  '08-bohr-read-as-angstrom': ['lattice-unit-suspect @ 10.263'],
  '09-cartesian-positions': ['atoms-frame-suspect @ atoms'],
  '10-centring-written-out': ['atoms-written-out @ atoms'],
  '11-two-pi': ['point-two-pi @ [0, 0.128205, 0]', 'point-two-pi @ [0.128205, 0.128205, 0]'],
  '12-reverse-setting': ['lattice-reverse-setting @ hR'],
  '13-mistakes-of-form': [
    'key-unknown @ units',
    'number-malformed @ O',
    'element-unknown @ Sl',
    'point-dimension @ [1/2, 1/4]',
    'path-label-unknown @ Yy',
    'supercell-singular @ - [1, 1, 0] - [2, 2, 0] - [0, 0, 1]',
  ],
  '14-missing-and-impossible': [
    'lattice-angles @ 120',
    'key-missing @ tI',
    'lattice-flat @ [[1, 0, 0], [0, 1, 0], [1, 1, 0]]',
    'lattice-type-mismatch @ 99',
  ],
  '15-outside-the-zone': ['path-repeats @ Γ – Γ', 'path-leaves-zone @ L – Q'],
  '16-half-a-step-off-gamma': ['mesh-breaks-symmetry @ [1/2, 1/2, 1/2]'],
  '17-divisions-of-other-axes': ['mesh-cell-suspect @ [8, 8, 3]'],
  '18-divisions-across-a-vacuum': ['mesh-across-vacuum @ 4'],
  '19-unequal-along-equivalent-vectors': ['mesh-breaks-symmetry @ [9, 9, 6]'],
  '20-supercell-without-k': ['supercell-misses-point @ [4, 4]'],
}

describe('drafts', () => {
  test('each one is listed', () => {
    const names = readdirSync(join(DEMO, 'drafts')).filter(isLatticeFile)
    expect(names.map(name => name.replace('.lattice.yaml', ''))).toEqual(Object.keys(DRAFTS))
  })

  test.each(Object.entries(DRAFTS))('%s', (name, expected) => {
    const text = read('drafts', `${name}.lattice.yaml`)
    const found = snapshotOf(text).findings
    expect(found.map(({ rule, at }) => `${rule} @ ${text.slice(...at).replace(/\s+/g, ' ')}`)).toEqual(
      expected,
    )
  })
})

/** The drafts that hold one mistake in a file that is otherwise sound. */
const SEVERAL = ['13', '14', '15']
const MENDED = Object.keys(DRAFTS).filter(name => !SEVERAL.includes(name.slice(0, 2)))

describe('the first fix that is offered', () => {
  test.each(MENDED)('mends %s', name => {
    let text = read('drafts', `${name}.lattice.yaml`)
    for (const rule of DRAFTS[name].map(line => line.split(' ')[0])) {
      const fix = findingsOf(text).find(finding => finding.rule === rule)?.fixes?.[0]
      if (fix) text = applyEdits(text, fix.edits)
    }
    const left = findingsOf(text).filter(({ severity }) => severity !== 'info')
    expect(left.map(({ rule, message }) => `${rule}: ${message}`)).toEqual([])
  })
})
