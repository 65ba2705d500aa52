import { zoneFigure } from '../exchange/figure.ts'
import { sceneOf } from '../exchange/scene.ts'
import { Refusal } from './io.ts'
import { Desk } from './output.ts'
import { onePick } from './pick.ts'
import { type Call, CLEAN, DOCUMENT, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

export const draw: Verb = {
  name: 'draw',
  operands: 'FILE',
  summary: 'the first zone with path and labels as a vector figure',
  about: [
    'An SVG in black on white for a paper: hidden edges dashed, labels as text, parallel projection.',
    'The view is the direction in which the eye stands: θ from the z axis and φ about it from x, in degrees. A plane lattice is drawn from above.',
  ],
  options: [
    {
      name: 'view',
      value: '"θ,φ"',
      help: 'Where the eye stands, e.g. "70,30"; where it is not said, on the side of the path.',
    },
    DOCUMENT,
    OUTPUT,
    OVERWRITE,
  ],
  examples: ['braggline draw lead-telluride.lattice.yaml -o zone.svg --view "70,30"'],

  async run({ given, io, engine }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const view = given.has('view') ? direction(given.value('view')!) : undefined
    const { snapshot, ordinal } = await onePick(given, io, engine)
    const scene = sceneOf(snapshot, ordinal)!
    desk.result(zoneFigure(scene, { view: scene.dimension === 3 ? view : undefined }))
    await desk.close()
    return CLEAN
  },
}

function direction(text: string): [number, number] {
  const parts = text.split(/\s*[,;]\s*/).map(part => part.trim().replace('−', '-'))
  const numbers = parts.map(Number)
  if (parts.length !== 2 || parts.includes('') || !numbers.every(Number.isFinite))
    throw new Refusal(`--view "${text}": two angles in degrees, θ and φ, parted by a comma`)
  const [theta, phi] = numbers
  if (theta < 0 || theta > 180) throw new Refusal(`--view "${text}": θ runs from 0 (from above) to 180`)
  return [theta, phi]
}
