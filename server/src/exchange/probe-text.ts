/** An effective-mass probe as people read it, and as a spreadsheet does. */
import { INVERSE_SYMBOL, SYMBOL } from '../crystal/units.ts'
import type { Vec3 } from '../crystal/vector.ts'
import { displayLabel } from '../format/path.ts'
import type { Crystal } from '../meaning/crystal.ts'
import { plain } from '../meaning/wording.ts'
import { csv } from './csv.ts'
import { inColumns } from './layout.ts'
import type { ProbeJson, ProbeMassJson, ProbePointJson } from './probe.ts'

const components = (dimension: number): string[] => ['k1', 'k2', 'k3'].slice(0, dimension)

export function probeCsv({ points, masses }: ProbeJson, dimension: number): string {
  const head = ['index', 'role', ...components(dimension), 'kx', 'ky', 'kz', 'dx', 'dy', 'dz']
  return csv([
    masses ? [...head, 'energy', 'misfit'] : head,
    ...points.map(({ index, role, fraction, cartesian, offset, energy, misfit }) => [
      ...[index, role, ...fraction, ...cartesian, ...offset],
      ...(masses ? [energy!, misfit!] : []),
    ]),
  ])
}

/** Rounding of the k-points must not show in second differences of the energies. */
const DIGITS = 10

/** Plain ASCII, so that it can be pasted into another program; no negative zero. */
const decimal = (x: number): string => {
  const text = x.toFixed(DIGITS)
  return Number(text) === 0 ? (0).toFixed(DIGITS) : text
}

export function probeTable(points: readonly ProbePointJson[], { unit, dimension }: Crystal): string {
  const k = INVERSE_SYMBOL[unit]
  const head = [
    ...['index', 'role', ...components(dimension!)],
    ...[`kx (${k})`, 'ky', 'kz', `offset x (${k})`, 'y', 'z'],
  ]
  const rows = points.map(({ index, role, fraction, cartesian, offset }) => [
    ...[String(index), role],
    ...[...fraction, ...cartesian, ...offset].map(decimal),
  ])
  return `${inColumns(
    [head, ...rows],
    head.map(name => (name === 'role' ? 'left' : 'right')),
  ).join('\n')}\n`
}

/** Beyond this part of the largest energy difference a band is no paraboloid over the step. */
const WARPED = 0.05

const KINDS: Record<ProbeMassJson['kind'], string> = {
  minimum: 'a minimum',
  maximum: 'a maximum',
  saddle: 'a saddle point',
  flat: 'flat within the rounding of the energies along an axis',
}

/** What the energies say. */
export function massText(probe: ProbeJson, crystal: Crystal): string {
  const { unit, dimension } = crystal
  const masses = probe.masses!
  const k = INVERSE_SYMBOL[unit]
  const axisName = (i: number) => `${i + 1}`
  const own = unit === 'angstrom' ? '' : ` (${plain(probe.step, 6)} ${k})`
  const lines = [
    `Effective masses at ${displayLabel(probe.label)}, step ${plain(probe.stepInverseAngstrom, 6)} Å⁻¹${own}: ${KINDS[masses.kind]}`,
    '',
    'Principal masses (mₑ; negative: a maximum along that axis)',
    ...indented(
      inColumns(
        [
          ['mass', '1/mass', 'axis (x, y, z)', 'in primitive vectors', 'in reciprocal vectors', ''],
          ...masses.principal.map(({ mass, inverse, axis, direct, reciprocal, free }) => [
            mass === null ? 'flat' : plain(mass, 5),
            plain(inverse, 5),
            triple(axis),
            triple(direct),
            triple(reciprocal),
            free ? 'one of many axes of this mass' : '',
          ]),
        ],
        ['right', 'right', 'left', 'left', 'left', 'left'],
      ),
    ),
    ...(masses.anisotropy === undefined
      ? []
      : [`  anisotropy: the largest mass is ${plain(masses.anisotropy, 3)} times the smallest`]),
    '',
    'Inverse-mass tensor (1/mₑ; x, y, z)',
    ...indented(
      inColumns(
        masses.inverseMass.slice(0, dimension).map(row => row.slice(0, dimension).map(x => plain(x, 6))),
        ['right', 'right', 'right'].slice(0, dimension) as 'right'[],
      ),
    ),
    `  rounding of the energies moves a component by up to ${plain(masses.rounding, 6)}`,
    '',
    `Gradient (eV ${SYMBOL[unit]}): ${triple(masses.gradient)}; rounding: up to ${plain(masses.gradientRounding, 6)}`,
    `  ${gradientWords(probe, k)}`,
    '',
    `Symmetry (little co-group of order ${probe.littleCoGroup}; axes ${probe.axes.map((axis, i) => `${axisName(i)} = ${triple(axis)}`).join(', ')})`,
    ...(masses.relations.length === 0 ? ['  asks nothing of the components along these axes'] : []),
    ...indented(
      inColumns(
        masses.relations.map(({ kind, components: [one, other], miss }) => [
          kind === 'vanishes' ? `${one} must vanish` : `${one} and ${other} must be equal`,
          `missed by ${plain(miss, 6)} /mₑ${miss > 2 * masses.rounding + NEGLIGIBLE * scaleOf(masses) ? ' (!)' : ''}`,
        ]),
        ['left', 'left'],
      ),
    ),
    `  largest miss of any component: ${plain(masses.asymmetry, 6)} /mₑ`,
    '',
    `Shape: a paraboloid misses the energies by up to ${plain(100 * masses.misfit, 2)} % of the largest difference`,
    ...(masses.misfit > WARPED
      ? [
          '  (!) no paraboloid over this step. Halve the step: where the misses stay, the band is warped (states meet at this',
          '  point), and no one tensor describes it; where they shrink, the step was too long.',
        ]
      : []),
  ]
  return `${lines.map(line => line.trimEnd()).join('\n')}\n`
}

/** Misses below this part of the largest component are the band's own higher powers. */
const NEGLIGIBLE = 1e-3

const scaleOf = ({ alongAxes }: ProbeMassJson): number => Math.max(...alongAxes.flat().map(Math.abs))

const indented = (lines: readonly string[]): string[] => lines.map(line => `  ${line}`)

const triple = (v: Vec3 | readonly number[]): string => `(${v.map(x => plain(x, 5)).join(', ')})`

function gradientWords({ masses, step }: ProbeJson, k: string): string {
  const { stationary, gradientMustVanish, extremumAt } = masses!
  if (stationary) return 'zero as far as this step can tell: the point is where the band turns'
  const where = extremumAt
    ? ` The paraboloid turns at k₀ + ${triple(extremumAt)} ${k}, ${plain(Math.hypot(...extremumAt) / step, 2)} steps away.`
    : ''
  return gradientMustVanish
    ? `(!) symmetry makes it vanish here: the energies are of other points, in another order, or of more than one band.${where}`
    : `(!) the point is no extremum: the masses are those at this point, not those of a band edge.${where}`
}
