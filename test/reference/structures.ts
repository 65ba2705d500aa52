/**
 * Atoms of the crystals of crystals.json, by name: the space group, its operations (International Tables, vol. A; from
 * memory) modulo the centring, and the independent atoms (sources as in crystals.json and those named; from memory).
 * A wrong coordinate or operation would give another space group or impossible distances, which the tests look at.
 */
export interface Structure {
  readonly group: number | string
  /** Operations as `x,y,z`; only the identity where every atom is listed. */
  readonly operations?: readonly string[]
  readonly atoms: readonly (readonly [
    element: string,
    x: number | string,
    y: number | string,
    z: number | string,
  ])[]
  readonly source: string
}

const WYCKOFF = 'R. W. G. Wyckoff, Crystal Structures (1963–)'

const withInverses = (...operations: string[]): string[] => [
  ...operations,
  ...operations.map(operation =>
    operation
      .split(',')
      .map(part =>
        part
          .replace(/(^|[+-])([xyz])/g, (_, sign, letter) => (sign === '-' ? `+${letter}` : `-${letter}`))
          .replace(/([+-])(\d\/\d)/g, (_, sign, n) => (sign === '-' ? `+${n}` : `-${n}`)),
      )
      .join(','),
  ),
]

const HCP = (element: string): Structure => ({
  group: 194,
  atoms: [
    [element, '1/3', '2/3', '1/4'],
    [element, '2/3', '1/3', '3/4'],
  ],
  source: 'hexagonal close packing',
})
const ALONE = (element: string, group: number): Structure => ({
  group,
  atoms: [[element, 0, 0, 0]],
  source: 'one atom a lattice point',
})
const DIAMOND = (element: string): Structure => ({
  group: 227,
  atoms: [
    [element, 0, 0, 0],
    [element, '1/4', '1/4', '1/4'],
  ],
  source: 'diamond structure',
})
const C2_C = withInverses('x,y,z', '-x,y,-z+1/2')
const C2_M = withInverses('x,y,z')

export const STRUCTURES: Readonly<Record<string, Structure>> = {
  'alpha-polonium': ALONE('Po', 221),
  'caesium chloride': {
    group: 221,
    atoms: [
      ['Cs', 0, 0, 0],
      ['Cl', '1/2', '1/2', '1/2'],
    ],
    source: WYCKOFF,
  },
  'strontium titanate': {
    group: 'Pm-3m',
    atoms: [
      ['Sr', '1/2', '1/2', '1/2'],
      ['Ti', 0, 0, 0],
      ['O', '1/2', 0, 0],
      ['O', 0, '1/2', 0],
      ['O', 0, 0, '1/2'],
    ],
    source: WYCKOFF,
  },
  copper: ALONE('Cu', 225),
  aluminium: ALONE('Al', 225),
  gold: ALONE('Au', 225),
  silicon: DIAMOND('Si'),
  germanium: DIAMOND('Ge'),
  diamond: DIAMOND('C'),
  'gallium arsenide': {
    group: 'F-43m',
    atoms: [
      ['Ga', 0, 0, 0],
      ['As', '1/4', '1/4', '1/4'],
    ],
    source: WYCKOFF,
  },
  'rock salt': {
    group: 'Fm-3m',
    atoms: [
      ['Na', 0, 0, 0],
      ['Cl', '1/2', '1/2', '1/2'],
    ],
    source: WYCKOFF,
  },
  'alpha-iron': ALONE('Fe', 229),
  tungsten: ALONE('W', 229),
  sodium: ALONE('Na', 229),
  chromium: ALONE('Cr', 229),
  rutile: {
    group: 'P4_2/mnm',
    atoms: [
      ['Ti', 0, 0, 0],
      ['Ti', '1/2', '1/2', '1/2'],
      ['O', 0.3053, 0.3053, 0],
      ['O', -0.3053, -0.3053, 0],
      ['O', 0.1947, 0.8053, '1/2'],
      ['O', 0.8053, 0.1947, '1/2'],
    ],
    source: WYCKOFF,
  },
  'white tin': {
    group: 141,
    atoms: [
      ['Sn', 0, 0, 0],
      ['Sn', 0, '1/2', '1/4'],
    ],
    source: WYCKOFF,
  },
  anatase: {
    group: 'I4_1/amd',
    atoms: [
      ['Ti', 0, 0, 0],
      ['Ti', 0, '1/2', '1/4'],
      ['O', 0, 0, 0.2081],
      ['O', 0, 0, -0.2081],
      ['O', 0, '1/2', 0.4581],
      ['O', 0, '1/2', 0.0419],
    ],
    source: WYCKOFF,
  },
  indium: ALONE('In', 139),
  aragonite: {
    group: 'Pmcn',
    operations: withInverses('x,y,z', '-x,y+1/2,-z+1/2', 'x+1/2,-y,-z', '-x+1/2,-y+1/2,z+1/2'),
    atoms: [
      ['Ca', '1/4', 0.41502, 0.75984],
      ['C', '1/4', 0.76211, -0.08518],
      ['O', '1/4', 0.92224, -0.09557],
      ['O', 0.47347, 0.68065, -0.08726],
    ],
    source: 'J. P. R. de Villiers, Am. Mineral. 56, 758 (1971)',
  },
  forsterite: {
    group: 'Pbnm',
    operations: withInverses('x,y,z', '-x,-y,z+1/2', 'x+1/2,-y+1/2,-z', '-x+1/2,y+1/2,-z+1/2'),
    atoms: [
      ['Mg', 0, 0, 0],
      ['Mg', 0.9915, 0.2774, '1/4'],
      ['Si', 0.4262, 0.094, '1/4'],
      ['O', 0.7657, 0.0913, '1/4'],
      ['O', 0.2215, 0.4474, '1/4'],
      ['O', 0.2777, 0.1628, 0.0331],
    ],
    source: 'J. R. Smyth and R. M. Hazen, Am. Mineral. 58, 588 (1973)',
  },
  'alpha-uranium': {
    group: 'Cmcm',
    atoms: [
      ['U', 0, 0.1025, '1/4'],
      ['U', 0, -0.1025, '3/4'],
    ],
    source: 'C. S. Barrett, M. H. Mueller and R. L. Hitterman, Phys. Rev. 129, 625 (1963)',
  },
  'alpha-gallium': {
    group: 'Cmce',
    operations: ['x,y,z', '-x,-y,-z', 'x,-y+1/2,z+1/2', 'x,y+1/2,-z+1/2'],
    atoms: [['Ga', 0, 0.1539, 0.081]],
    source: 'B. D. Sharma and J. Donohue, Z. Kristallogr. 117, 293 (1962)',
  },
  'alpha-sulfur': {
    group: 'Fddd',
    operations: withInverses('x,y,z', '-x+3/4,-y+3/4,z', '-x+3/4,y,-z+3/4', 'x,-y+3/4,-z+3/4'),
    atoms: [
      ['S', 0.8554, 0.9526, 0.9516],
      ['S', 0.7844, 0.0301, 0.0763],
      ['S', 0.7069, 0.9795, 0.004],
      ['S', 0.7862, 0.9073, 0.129],
    ],
    source: 'S. J. Rettig and J. Trotter, Acta Cryst. C 43, 2260 (1987)',
  },
  'titanium disilicide (C54)': {
    group: 70,
    atoms: [
      ['Ti', 0, 0, 0],
      ['Ti', '1/4', '1/4', '1/4'],
      ['Si', 0, 0.3365, 0],
      ['Si', 0, -0.3365, 0],
      ['Si', '1/4', 0.5865, '1/4'],
      ['Si', '1/4', -0.0865, '1/4'],
    ],
    source: 'W. Jeitschko, Acta Cryst. B 33, 2347 (1977)',
  },
  'sodium nitrite': {
    group: 'Im2m',
    atoms: [
      ['Na', 0, 0.5862, 0],
      ['N', 0, 0.12, 0],
      ['O', 0, 0, 0.1944],
      ['O', 0, 0, -0.1944],
    ],
    source: 'M. I. Kay and B. C. Frazer, Acta Cryst. 14, 56 (1961)',
  },
  magnesium: HCP('Mg'),
  zinc: HCP('Zn'),
  cobalt: HCP('Co'),
  cadmium: HCP('Cd'),
  graphite: {
    group: 'P6_3/mmc',
    atoms: [
      ['C', 0, 0, '1/4'],
      ['C', 0, 0, '3/4'],
      ['C', '1/3', '2/3', '1/4'],
      ['C', '2/3', '1/3', '3/4'],
    ],
    source: 'J. D. Bernal, Proc. R. Soc. A 106, 749 (1924)',
  },
  'zinc oxide': {
    group: 'P6_3mc',
    atoms: [
      ['Zn', '1/3', '2/3', 0],
      ['Zn', '2/3', '1/3', '1/2'],
      ['O', '1/3', '2/3', 0.3825],
      ['O', '2/3', '1/3', 0.8825],
    ],
    source: WYCKOFF,
  },
  'alpha-quartz': {
    group: 'P3_221',
    operations: ['x,y,z', '-y,x-y,z+2/3', '-x+y,-x,z+1/3', 'y,x,-z', 'x-y,-y,-z+1/3', '-x,-x+y,-z+2/3'],
    atoms: [
      ['Si', 0.4697, 0, '2/3'],
      ['O', 0.4135, 0.2669, 0.7858],
    ],
    source: 'K. Kihara, Eur. J. Mineral. 2, 63 (1990)',
  },
  bismuth: {
    group: 'R-3m',
    atoms: [
      ['Bi', 0, 0, 0.23389],
      ['Bi', 0, 0, -0.23389],
    ],
    source: 'D. Schiferl and C. S. Barrett, J. Appl. Cryst. 2, 30 (1969)',
  },
  corundum: {
    group: 'R-3c',
    operations: withInverses(
      'x,y,z',
      '-y,x-y,z',
      '-x+y,-x,z',
      'y,x,-z+1/2',
      'x-y,-y,-z+1/2',
      '-x,-x+y,-z+1/2',
    ),
    atoms: [
      ['Al', 0, 0, 0.35228],
      ['O', 0.30624, 0, '1/4'],
    ],
    source: 'R. E. Newnham and Y. M. de Haan, Z. Kristallogr. 117, 235 (1962)',
  },
  calcite: {
    group: 167,
    operations: withInverses(
      'x,y,z',
      '-y,x-y,z',
      '-x+y,-x,z',
      'y,x,-z+1/2',
      'x-y,-y,-z+1/2',
      '-x,-x+y,-z+1/2',
    ),
    atoms: [
      ['Ca', 0, 0, 0],
      ['C', 0, 0, '1/4'],
      ['O', 0.2568, 0, '1/4'],
    ],
    source: WYCKOFF,
  },
  'beta-polonium': ALONE('Po', 166),
  baddeleyite: {
    group: 'P2_1/c',
    operations: withInverses('x,y,z', '-x,y+1/2,-z+1/2'),
    atoms: [
      ['Zr', 0.2754, 0.0395, 0.2083],
      ['O', 0.07, 0.3317, 0.3447],
      ['O', 0.4496, 0.7569, 0.4792],
    ],
    source: 'C. J. Howard, R. J. Hill and B. E. Reichert, Acta Cryst. B 44, 116 (1988)',
  },
  'beta-gallium oxide': {
    group: 'C2/m',
    operations: C2_M,
    atoms: [
      ['Ga', 0.0905, 0, 0.7946],
      ['Ga', 0.3414, 0, 0.6857],
      ['O', 0.1674, 0, 0.1011],
      ['O', 0.4957, 0, 0.2553],
      ['O', 0.8279, 0, 0.4365],
    ],
    source: 'J. Åhman, G. Svensson and J. Albertsson, Acta Cryst. C 52, 1336 (1996)',
  },
  tenorite: {
    group: 'C2/c',
    operations: C2_C,
    atoms: [
      ['Cu', '1/4', '1/4', 0],
      ['O', 0, 0.4184, '1/4'],
    ],
    source: 'S. Åsbrink and L.-J. Norrby, Acta Cryst. B 26, 8 (1970)',
  },
  diopside: {
    group: 15,
    operations: C2_C,
    atoms: [
      ['Ca', 0, 0.3015, '1/4'],
      ['Mg', 0, 0.9082, '1/4'],
      ['Si', 0.2862, 0.0933, 0.2293],
      ['O', 0.1156, 0.0873, 0.1422],
      ['O', 0.3611, 0.25, 0.318],
      ['O', 0.3505, 0.0176, 0.9953],
    ],
    source: 'M. Cameron et al., Am. Mineral. 58, 594 (1973)',
  },
  kyanite: {
    group: 'P-1',
    operations: withInverses('x,y,z'),
    atoms: [
      ['Al', 0.3254, 0.704, 0.4582],
      ['Al', 0.2974, 0.6989, 0.9505],
      ['Al', 0.0998, 0.3862, 0.6403],
      ['Al', 0.112, 0.9175, 0.1649],
      ['Si', 0.2962, 0.0649, 0.7066],
      ['Si', 0.291, 0.3317, 0.1892],
      ['O', 0.1095, 0.1468, 0.1288],
      ['O', 0.123, 0.6856, 0.1812],
      ['O', 0.2747, 0.4545, 0.9547],
      ['O', 0.2831, 0.9354, 0.9353],
      ['O', 0.1084, 0.152, 0.6669],
      ['O', 0.1219, 0.6307, 0.6389],
      ['O', 0.2822, 0.4453, 0.4288],
      ['O', 0.2915, 0.9467, 0.4659],
      ['O', 0.5008, 0.2749, 0.244],
      ['O', 0.5015, 0.2312, 0.7553],
    ],
    source: 'J. K. Winter and S. Ghose, Am. Mineral. 64, 573 (1979)',
  },
}

const CENTRING: Readonly<Record<string, readonly (readonly [number, number, number])[]>> = {
  P: [[0, 0, 0]],
  A: [
    [0, 0, 0],
    [0, 1 / 2, 1 / 2],
  ],
  B: [
    [0, 0, 0],
    [1 / 2, 0, 1 / 2],
  ],
  C: [
    [0, 0, 0],
    [1 / 2, 1 / 2, 0],
  ],
  I: [
    [0, 0, 0],
    [1 / 2, 1 / 2, 1 / 2],
  ],
  F: [
    [0, 0, 0],
    [0, 1 / 2, 1 / 2],
    [1 / 2, 0, 1 / 2],
    [1 / 2, 1 / 2, 0],
  ],
  R: [
    [0, 0, 0],
    [2 / 3, 1 / 3, 1 / 3],
    [1 / 3, 2 / 3, 2 / 3],
  ],
}

const numberOf = (x: number | string): number => {
  if (typeof x === 'number') return x
  const [p, q] = x.split('/').map(Number)
  return p / q
}

/** `-x+y`, `x-y`, `-z+1/2` at a place. */
function evaluate(part: string, [x, y, z]: readonly number[]): number {
  const at: Record<string, number> = { x, y, z }
  return [...part.matchAll(/([+-]?)(\d\/\d|[xyz])/g)].reduce(
    (sum, [, sign, term]) => sum + (sign === '-' ? -1 : 1) * (at[term] ?? numberOf(term)),
    0,
  )
}

const SAME = 1e-6
const isWhole = (x: number): boolean => Math.abs(x - Math.round(x)) < SAME

/** All atoms of a structure, one copy a lattice point, as fractions of the conventional cell. */
export function atomsOf({ operations = ['x,y,z'], atoms }: Structure, centring: string) {
  return atoms.flatMap(([element, ...place]) => {
    const site = place.map(numberOf)
    const images: number[][] = []
    for (const operation of operations) {
      const image = operation.split(',').map(part => evaluate(part, site))
      const isKnown = images.some(other =>
        CENTRING[centring].some(shift => other.every((x, i) => isWhole(x - image[i] - shift[i]))),
      )
      if (!isKnown) images.push(image)
    }
    return images.map(position => ({ element, position }))
  })
}

/** As one writes it: thirds and sixths as fractions, else five digits. */
export function written(x: number): string {
  for (const q of [1, 2, 3, 4, 6, 12])
    if (Math.abs(x * q - Math.round(x * q)) < SAME) return `${Math.round(x * q)}${q === 1 ? '' : `/${q}`}`
  return String(Number(x.toFixed(5)))
}
