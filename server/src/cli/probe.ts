import { readFileSync } from 'node:fs'
import { resolve } from 'node:path'
import { probeSteps } from '../crystal/probe.ts'
import { type Energies, probeJson, readEnergies } from '../exchange/probe.ts'
import { massText, probeCsv, probeTable } from '../exchange/probe-text.ts'
import { nearest } from '../format/nearest.ts'
import { listedNumber } from '../exchange/listed-number.ts'
import { normaliseLabel } from '../format/path.ts'
import type { Crystal, PlacedPoint } from '../meaning/crystal.ts'
import { inverseLength } from '../meaning/wording.ts'
import { reason, STANDARD_INPUT } from './files.ts'
import { type Io, Refusal } from './io.ts'
import type { Given } from './options.ts'
import { Desk } from './output.ts'
import { oneCrystal } from './pick.ts'
import { type Call, CLEAN, DOCUMENT, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

/** Å⁻¹. Small against a zone, and energies to 10⁻⁵ eV still give masses to a per cent or so (common practice). */
const DEFAULT_STEP = 0.01

export const probe: Verb = {
  name: 'probe',
  operands: 'FILE',
  summary: 'the k-points of an effective-mass probe, and the masses from their energies',
  about: [
    'Lists the points of central differences around a point of the file or its label book: 19 in three dimensions, 9 in two, 3 in one. They stand along the principal axes that symmetry gives the point, or along its one main axis and across it, else along x, y, z.',
    'With --energies it reads one energy a line, in eV and in the order of the points, and gives the principal masses in units of the electron mass with their axes, the inverse-mass tensor, the gradient, and by how much the energies miss what symmetry asks. csv then lists the points with their energies and how far each is from the paraboloid.',
  ],
  options: [
    { name: 'at', value: 'LABEL', help: 'The point, by its label.' },
    {
      name: 'step',
      value: 'h',
      help: `The step in Å⁻¹, whatever the unit of the file; ${DEFAULT_STEP} where it is not said.`,
    },
    {
      name: 'energies',
      value: 'LIST',
      help: 'A file (- for standard input) with one energy a line, in eV; # begins a comment.',
    },
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
  examples: [
    'braggline probe lead-telluride.lattice.yaml --at L --step 0.01 --format csv -o probe.csv',
    'braggline probe lead-telluride.lattice.yaml --at L --step 0.01 --energies energies.txt',
  ],

  async run({ given, io, engine }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const label = given.value('at')
    if (label === undefined) throw new Refusal('no point is named: --at LABEL')
    const step = stepOf(given)
    const list = given.value('energies')
    if (list === STANDARD_INPUT && given.operands.includes(STANDARD_INPUT))
      throw new Refusal('standard input can be the file or the energies, not both')
    const crystal = await oneCrystal(given, io, engine)
    const at = pointAt(crystal, label)
    const { inradius } = crystal.zone!
    if (step * crystal.angstrom >= inradius)
      throw new Refusal(
        `--step ${given.value('step')} Å⁻¹ leaves the zone: its inradius is ${inverseLength(inradius / crystal.angstrom, 'angstrom')}`,
      )
    const energies = list === undefined ? undefined : await energiesOf(list, crystal, io)
    const probed = probeJson(crystal, at, step, energies)
    if (!probed) throw new Refusal('the symmetry of the crystal could not be found')
    const format = given.value('format') ?? 'table'
    if (format === 'json') desk.result(`${JSON.stringify(probed, null, 2)}\n`)
    else if (format === 'csv') desk.result(probeCsv(probed, crystal.dimension!))
    else desk.result(probed.masses ? massText(probed, crystal) : probeTable(probed.points, crystal))
    await desk.close()
    return CLEAN
  },
}

function stepOf(given: Given): number {
  const text = given.value('step')
  if (text === undefined) return DEFAULT_STEP
  const step = listedNumber(text)?.value
  if (step === undefined || !(step > 0)) throw new Refusal(`--step ${text} is no length over zero, in Å⁻¹`)
  return step
}

function pointAt(crystal: Crystal, text: string): PlacedPoint {
  const label = normaliseLabel(text.trim())
  if (label === undefined) throw new Refusal(`--at ${text} is no label`)
  const point = crystal.pointOf(label)
  if (point) return point
  const known = [...crystal.points.keys(), ...crystal.bookPoints.keys()]
  if (crystal.fileDefines(label)) throw new Refusal(`the file's point ${text} could not be read`)
  const near = nearest(label, known)
  throw new Refusal(
    `no point is named ${text}${near ? `; did you mean ${near}?` : known.length > 0 ? ` (${known.join(', ')})` : ''}`,
  )
}

async function energiesOf(name: string, { dimension }: Crystal, io: Io): Promise<Energies> {
  const shown = name === STANDARD_INPUT ? 'standard input' : name
  const energies = readEnergies(await listText(name, io), probeSteps(dimension!).length)
  if ('fault' in energies) throw new Refusal(`${shown}: ${energies.fault}`)
  return energies
}

/** A list that another program wrote. @throws Refusal saying why it could not be read as text. */
export async function listText(name: string, io: Io): Promise<string> {
  let bytes: Uint8Array
  try {
    bytes = name === STANDARD_INPUT ? await io.readInput() : readFileSync(resolve(io.cwd, name))
  } catch (error) {
    throw new Refusal(`${name}: ${reason(error)}`)
  }
  if (bytes.includes(0)) throw new Refusal(`${name}: a binary file, no list of numbers`)
  // Comments may be in any encoding: what is no UTF-8 there does no harm.
  return new TextDecoder('utf-8').decode(bytes)
}
