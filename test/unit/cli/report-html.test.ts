import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterEach, beforeEach, expect, test } from 'vitest'
import { World } from './world.ts'

let world: World
beforeEach(() => {
  world = new World()
})
afterEach(() => world.remove())
const fixture = (name: string) =>
  readFileSync(join(import.meta.dirname, '../exchange/fixtures', `${name}.lattice.yaml`), 'utf8')

test('several files are one page, with all crystals, figures and findings', async () => {
  world.write('a.lattice.yaml', fixture('meshes')).write('b.lattice.yaml', fixture('draft'))
  const { out, status } = await world.run(['report', '.', '--format', 'html'])
  expect(status).toBe(0)
  expect(out.match(/<!DOCTYPE html>/g)).toHaveLength(1)
  expect(out.match(/<article>/g)).toHaveLength(3)
  expect(out.match(/<svg /g)).toHaveLength(3)
  expect(out).toContain('path-label-unknown')
})

test('Markdown of several files names each figure once', async () => {
  world.write('a.lattice.yaml', fixture('silicon')).write('b.lattice.yaml', fixture('sheet'))
  const { out } = await world.run(['report', '.', '--format', 'markdown'])
  expect(out.match(/^\[zone-\d+\]: data:/gm)).toEqual(['[zone-1]: data:', '[zone-2]: data:'])
})
