/** Crystals of CIFs held against a second opinion. */
import { spawnSync } from 'node:child_process'
import { join } from 'node:path'
import { expect } from 'vitest'
import {
  add,
  combine,
  distance,
  inverse,
  type Mat3,
  norm,
  transpose,
  type Vec3,
} from '../../server/src/crystal/vector.ts'
import type { Crystal } from '../../server/src/meaning/crystal.ts'

/** Debian's own Python: the packages are installed for that one. */
export function ask<T>(request: unknown): T {
  const { status, stdout, stderr, error } = spawnSync(
    '/usr/bin/python3',
    [join(import.meta.dirname, 'cif.py')],
    {
      input: JSON.stringify(request),
      encoding: 'utf8',
      maxBuffer: 2 ** 30,
    },
  )
  if (status !== 0)
    throw new Error(`the second opinion failed (is python3-gemmi installed?): ${error ?? stderr}`)
  return JSON.parse(stdout)
}

export interface Setting {
  readonly hall: number
  readonly number: number
  readonly choice: string
  readonly hallSymbol: string
  readonly symbol: string
  readonly cell: readonly [number, number, number, number, number, number]
  readonly places: Readonly<Record<string, readonly Vec3[]>>
  readonly text: string
}

/** Å. Far enough to tell crystals apart, near enough to list. */
const REACH = 7

export interface Placed {
  readonly rows: Mat3
  readonly atoms: readonly { readonly element: string; readonly fraction: Vec3 }[]
}

/** Centre, other, distances in Å. */
export type Surroundings = Record<string, Record<string, number[]>>

/** For one atom of each element the distances of all atoms within reach, by element, in rising order. */
export function surroundings({ rows, atoms }: Placed): Surroundings {
  const heights = transpose(inverse(rows)).map(column => Math.ceil(REACH * norm(column)) + 1)
  const shifts: Vec3[] = []
  for (let i = -heights[0]; i <= heights[0]; i++)
    for (let j = -heights[1]; j <= heights[1]; j++)
      for (let k = -heights[2]; k <= heights[2]; k++) shifts.push(combine([i, j, k], rows))
  const found: Surroundings = {}
  const elements = [...new Set(atoms.map(atom => atom.element))]
  for (const element of elements) {
    const centre = combine(atoms.find(atom => atom.element === element)!.fraction, rows)
    const lists = Object.fromEntries(elements.map(other => [other, [] as number[]]))
    for (const atom of atoms) {
      const x = combine(atom.fraction, rows)
      for (const shift of shifts) {
        const d = distance(add(x, shift), centre)
        if (d < REACH) lists[atom.element].push(d)
      }
    }
    for (const list of Object.values(lists)) list.sort((p, q) => p - q)
    found[element] = lists
  }
  return found
}

export const placedOf = ({ lattice, atoms }: Crystal): Placed => ({
  rows: lattice!.primitive,
  atoms: atoms.map(({ element, fraction }) => ({
    element,
    fraction: fraction.map(x => x - Math.floor(x)) as unknown as Vec3,
  })),
})

/** The same lists, of more than `least` distances; one on the edge of the reach may be in one and not in the other. */
export function expectAlike(found: Surroundings, wanted: Surroundings, least = 10): void {
  expect(Object.keys(found).sort()).toEqual(Object.keys(wanted).sort())
  let counted = 0
  for (const centre of Object.keys(wanted))
    for (const other of Object.keys(wanted[centre])) {
      const [p, q] = [found, wanted].map(all => all[centre][other])
      const common = Math.min(p.length, q.length)
      counted += common
      for (let i = 0; i < common; i++) expect(Math.abs(p[i] - q[i]), `${centre}–${other}`).toBeLessThan(SAME)
      for (const left of [...p.slice(common), ...q.slice(common)]) expect(left).toBeGreaterThan(REACH - SAME)
    }
  expect(counted).toBeGreaterThan(least)
}
/** Å: coordinates are written with six digits and more. */
const SAME = 1e-4
