/** The command as it was built, run as users and scripts run it. */
import { execFileSync, spawn, spawnSync } from 'node:child_process'
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'

const ROOT = fileURLToPath(new URL('../..', import.meta.url))
const CLI = join(ROOT, 'dist', 'cli.js')

let folder: string
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'braggline-built-'))
})
afterAll(() => rmSync(folder, { recursive: true, force: true }))

const file = (name: string, text: string) => {
  writeFileSync(join(folder, name), text)
  return name
}
const braggline = (args: string[], input = '') => {
  const { status, stdout, stderr } = spawnSync(process.execPath, [CLI, ...args], {
    cwd: folder,
    input,
    encoding: 'utf8',
  })
  return { status, out: stdout, err: stderr }
}

test('says its version', () => {
  const { version } = JSON.parse(readFileSync(join(ROOT, 'package.json'), 'utf8'))
  expect(braggline(['--version'])).toEqual({ status: 0, out: `${version}\n`, err: '' })
})

test('checks standard input, and its exit status tells', () => {
  expect(braggline(['check', '-'], 'lattice: {bravais: cF, a: 5.43}\npath: Γ – X\n')).toEqual({
    status: 0,
    out: 'No findings in 1 file.\n',
    err: '',
  })
  expect(braggline(['check', '-'], 'lattice: {bravais: cF}\n').status).toBe(1)
  expect(braggline(['check', 'gone.yaml'])).toEqual({
    status: 2,
    out: '',
    err: 'braggline: gone.yaml: no such file or folder\n',
  })
})

test('reports the demo', () => {
  const { status, out, err } = braggline(['report', `${ROOT}/demo/*.lattice.yaml`, '--format', 'jsonl'])
  expect({ status, err }).toEqual({ status: 0, err: '' })
  const reports = out
    .trimEnd()
    .split('\n')
    .map(line => JSON.parse(line))
  expect(reports.length).toBeGreaterThan(5)
  for (const { lattice, zone } of reports) {
    // The volume of the zone is (2π)ⁿ over that of the cell.
    expect((zone.volume * lattice.volume) / (2 * Math.PI) ** lattice.dimension).toBeCloseTo(1, 9)
  }
})

test('finds the symmetry of a cell that is too large to be searched at once', () => {
  // 5 × 4 × 4 atoms of one kind and one of another on a cubic grid: a tetragonal cell, P4/mmm (No. 123), 16 rotations.
  const atoms: string[] = []
  for (let x = 0; x < 4; x++)
    for (let y = 0; y < 4; y++)
      for (let z = 0; z < 5; z++) atoms.push(`  - ${x + y + z === 0 ? 'Na' : 'Cl'}: [${x}/4, ${y}/4, ${z}/5]`)
  const text = `lattice: {bravais: tP, a: 12, c: 15}\natoms:\n${atoms.join('\n')}\n`
  const { out } = braggline(['report', '-', '--format', 'json'], text)
  expect(JSON.parse(out).symmetry).toMatchObject({ spaceGroup: { number: 123 }, rotations: 16 })
})

describe('as a good neighbour', () => {
  test('a reader that has seen enough is no fault', () => {
    const lines = Array.from({ length: 20_000 }, (_, i) => `key${i}: 1\n`).join('')
    file('long.lattice.yaml', lines)
    const command = `set -o pipefail; "${process.execPath}" "${CLI}" check long.lattice.yaml --fail-on never --format jsonl | head -n 1 > /dev/null`
    const { status, stderr } = spawnSync('bash', ['-c', command], { cwd: folder, encoding: 'utf8' })
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' })
  })

  test('an interrupt ends it at once and leaves nothing behind', async () => {
    const before = readdirSync(folder)
    const child = spawn(process.execPath, [CLI, 'check', '-'], {
      cwd: folder,
      stdio: ['pipe', 'pipe', 'pipe'],
    })
    let said = ''
    child.stderr.on('data', data => {
      said += data
    })
    await new Promise(resolve => child.once('spawn', resolve))
    child.kill('SIGINT')
    const signal = await new Promise(resolve => child.on('exit', (_, signal) => resolve(signal)))
    expect(signal).toBe('SIGINT')
    expect(said).toBe('')
    expect(readdirSync(folder)).toEqual(before)
  })

  test('what it writes to a pipe arrives whole', () => {
    const out = execFileSync(
      process.execPath,
      [CLI, 'report', `${ROOT}/demo/*.lattice.yaml`, '--format', 'json'],
      {
        cwd: folder,
        encoding: 'utf8',
        maxBuffer: 1 << 28,
      },
    )
    expect(Array.isArray(JSON.parse(out))).toBe(true)
  })
})
