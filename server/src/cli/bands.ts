import { bandFigure } from '../exchange/band-figure.ts'
import { bandPoints, bandsCsv, bandsJson, bandsOf, DEFAULT_BANDS, MOST_BANDS } from '../exchange/bands.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { Refusal } from './io.ts'
import { ordinal } from './options.ts'
import { Desk } from './output.ts'
import { oneCrystal } from './pick.ts'
import { type Call, CLEAN, DOCUMENT, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

export const bands: Verb = {
  name: 'bands',
  operands: 'FILE',
  summary: 'empty-lattice bands along the path',
  about: [
    'The energies of free electrons, (ħ²/2m)|k + G|² in eV, at the sampled points of the path: which crossings and degeneracies come from the lattice alone.',
    'csv and json give the lowest N energies at each point. svg is a figure: energy upwards, lines the heavier the more states share a band.',
  ],
  options: [
    { name: 'count', value: 'N', help: `How many bands; ${DEFAULT_BANDS} where it is not said.` },
    {
      name: 'format',
      value: 'FORMAT',
      choices: ['csv', 'json', 'svg'],
      help: 'csv (the default), json or svg.',
    },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: [
    'braggline bands lead-telluride.lattice.yaml --count 8 -o bands.csv',
    'braggline bands lead-telluride.lattice.yaml --format svg -o bands.svg',
  ],

  async run({ given, io, engine }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const count = ordinal(given, 'count') ?? DEFAULT_BANDS
    if (count > MOST_BANDS) throw new Refusal(`--count ${count} is too many: at most ${MOST_BANDS}`)
    const crystal = await oneCrystal(given, io, engine)
    desk.result(written(crystal, given.value('format') ?? 'csv', count))
    await desk.close()
    return CLEAN
  },
}

function written(crystal: Crystal, format: string, count: number): string {
  const drawn = bandsOf(crystal, count)
  if (!drawn) throw new Refusal('the file has no path: bands are drawn along one')
  if (format === 'svg') return bandFigure(drawn)
  const points = bandPoints(crystal, count)!
  if (format === 'json') return `${JSON.stringify(bandsJson(points, crystal), null, 2)}\n`
  return bandsCsv(points, crystal.dimension!)
}
