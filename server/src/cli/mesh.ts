import { csv } from '../exchange/csv.ts'
import { inColumns } from '../exchange/layout.ts'
import { MOST_MESH_POINTS, type MeshJson, meshJson } from '../exchange/mesh-points.ts'
import { meshesOf, type NamedMesh } from '../meaning/sampling.ts'
import { nearest } from '../format/nearest.ts'
import { count } from '../meaning/wording.ts'
import { Refusal } from './io.ts'
import type { Given } from './options.ts'
import { Desk } from './output.ts'
import { oneCrystal } from './pick.ts'
import { type Call, CLEAN, DOCUMENT, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

const DIGITS = 8

export const mesh: Verb = {
  name: 'mesh',
  operands: 'FILE',
  summary: 'the k-points of the mesh with their weights',
  about: [
    'Lists points as fractions of the primitive reciprocal vectors in [0, 1), with weights that add up to 1.',
    "Irreducible are those that the crystal's rotations (and time reversal, where it holds) leave of the mesh; only rotations that map the mesh onto itself count.",
  ],
  options: [
    { name: 'irreducible', help: 'One point of each set of equivalent ones (the default).' },
    { name: 'full', help: 'Every point, each with the same weight.' },
    { name: 'name', value: 'NAME', help: 'Which mesh, where the file names several.' },
    {
      name: 'format',
      value: 'FORMAT',
      choices: ['table', 'csv', 'json'],
      help: 'table (the default), csv or json.',
    },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: ['braggline mesh lead-telluride.lattice.yaml --format csv -o mesh.csv'],

  async run({ given, io, engine }: Call): Promise<number> {
    if (given.has('full') && given.has('irreducible'))
      throw new Refusal('--full and --irreducible exclude each other')
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const crystal = await oneCrystal(given, io, engine)
    const listed = meshJson(crystal, picked(meshesOf(crystal), given).mesh, given.has('full'))
    if (!listed)
      throw new Refusal(
        crystal.kGroup
          ? `the list would have over ${MOST_MESH_POINTS} points`
          : 'the symmetry of the crystal could not be found',
      )
    desk.result(WRITTEN[given.value('format') ?? 'table'](listed))
    await desk.close()
    return CLEAN
  },
}

function picked(meshes: readonly NamedMesh[], given: Given): NamedMesh {
  const name = given.value('name')
  const known = meshes.flatMap(({ name }) => name ?? [])
  if (name !== undefined) {
    const mesh = meshes.find(mesh => mesh.name === name)
    if (mesh) return mesh
    const near = nearest(name, known)
    throw new Refusal(`no mesh is named ${name}${near ? `; did you mean ${near}?` : ''}`)
  }
  if (meshes.length === 0) throw new Refusal('the file has no mesh that can be read')
  if (meshes.length > 1)
    throw new Refusal(
      `the file has ${count(meshes.length, 'mesh', 'meshes')}: pick one with --name (${known.join(', ')})`,
    )
  return meshes[0]
}

const WRITTEN: Record<string, (mesh: MeshJson) => string> = {
  json: mesh => `${JSON.stringify(mesh, null, 2)}\n`,
  csv: ({ divisions, points }) =>
    csv([head(divisions.length), ...points.map(({ fraction, weight }) => [...fraction, weight])]),
  table: ({ divisions, points }) => {
    const rows = points.map(({ fraction, weight }) => [...fraction, weight].map(x => x.toFixed(DIGITS)))
    const names = head(divisions.length)
    return `${inColumns(
      [names, ...rows],
      names.map(() => 'right'),
    ).join('\n')}\n`
  },
}

const head = (dimension: number): string[] => [...['k1', 'k2', 'k3'].slice(0, dimension), 'weight']
