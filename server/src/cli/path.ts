import { knownSegments } from '../exchange/path-points.ts'
import { pathCsv, pathJson, pathTable } from '../exchange/path-table.ts'
import { walkedPath } from '../meaning/sampling.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { Refusal } from './io.ts'
import { Desk } from './output.ts'
import { oneCrystal } from './pick.ts'
import { type Call, CLEAN, DOCUMENT, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

/** A path of more points was not meant: a spacing in another unit makes as many. */
const MOST_POINTS = 1_000_000

export const path: Verb = {
  name: 'path',
  operands: 'FILE',
  summary: 'the k-points that the path runs through',
  about: [
    'Lists the sampled points: piece, ordinal, distance along the path (unbroken over a break), fractions of the primitive reciprocal vectors, Cartesian k with the 2π, label; csv and json also the direction of the segment.',
    'Where two segments meet, the point is listed once, with the direction of the first; write a break (|) there to have both.',
  ],
  options: [
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
  examples: ['braggline path lead-telluride.lattice.yaml --format csv -o path.csv'],

  async run({ given, io, engine }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const crystal = await oneCrystal(given, io, engine)
    desk.result(written(crystal, given.value('format') ?? 'table'))
    await desk.close()
    return CLEAN
  },
}

function written(crystal: Crystal, format: string): string {
  const labels = walkedPath(crystal).flatMap(piece => piece.labels)
  if (labels.length === 0) throw new Refusal('the file has no path')
  const unknown = new Set(labels.filter(label => !crystal.pointOf(label)))
  // A list with a gap would look like a whole one.
  if (unknown.size > 0)
    throw new Refusal(`the path names points that are not known: ${[...unknown].join(', ')}`)
  const segments = knownSegments(crystal)
  const total = segments.reduce((sum, { steps }) => sum + steps, 1)
  if (total > MOST_POINTS)
    throw new Refusal(`the path would have ${total} points; over ${MOST_POINTS} are not listed`)
  const dimension = crystal.dimension!
  const points = pathJson(segments, dimension)
  if (format === 'json') return `${JSON.stringify(points, null, 2)}\n`
  return format === 'csv' ? pathCsv(points, dimension) : pathTable(points, crystal, dimension)
}
