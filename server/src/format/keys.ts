// biome-ignore-all lint/suspicious/noTemplateCurlyInString: the skeletons are in the snippet syntax of the LSP.
/**
 * The keys of a lattice file, one row each. The rows drive decoding, completion, hover and the published JSON Schema:
 * a new key is a new row, plus what it means elsewhere.
 */
import { BRAVAIS, BRAVAIS_TYPES, CENTRINGS, type Centring } from '../crystal/bravais.ts'
import { BOOK_IDS, type BookId } from './model.ts'

/**
 * What a value may be.
 *
 * - `text`, `word` (one of `words`), `number`, `count` (a whole number from 1)
 * - `vector`, `counts`: lists of one to three numbers, or exactly `length` of them
 * - `rows`: one to three vectors; `matrix`: the same, or one list for a diagonal matrix
 * - `ends`: a list of two labels
 * - `mapping`: has the rows below it as its keys, no others
 * - the rest are forms of their own, read by one function each
 */
export type ValueKind =
  | 'text'
  | 'word'
  | 'number'
  | 'count'
  | 'vector'
  | 'counts'
  | 'rows'
  | 'matrix'
  | 'ends'
  | 'mapping'
  | 'atoms'
  | 'atom'
  | 'space-group'
  | 'points'
  | 'point'
  | 'path'
  | 'meshes'
  | 'severities'

export type Quantity = 'length' | 'inverse length' | 'angle' | 'fraction' | 'mesh step'

export interface Word {
  readonly word: string
  readonly meaning: string
  /** Other spellings that are read as this word. */
  readonly also?: readonly string[]
  /** Spellings that are not read, but are probably meant as this word. */
  readonly meant?: readonly string[]
}

export interface KeyRow {
  /** Names of the keys from the top, joined by points; `*` stands for a name of the user's own. */
  readonly path: string
  readonly kind: ValueKind
  /** One or two sentences, Markdown. */
  readonly doc: string
  /** A value as it may stand after the colon. */
  readonly example: string
  readonly words?: readonly Word[]
  /** In words or as a value. */
  readonly default?: string
  readonly quantity?: Quantity
  readonly positive?: boolean
  readonly required?: boolean
  /** How many entries a vector must have, where that is always the same. */
  readonly length?: number
  /** Where the key may stand, when its mapping alone does not say. */
  readonly where?: string
  /** What completion inserts after the colon, in the LSP's snippet syntax, where that is not the example. */
  readonly skeleton?: string
}

const BOOKS: Record<BookId, string> = {
  'setyawan-curtarolo-2010': 'W. Setyawan and S. Curtarolo, Comput. Mater. Sci. 49, 299 (2010).',
  'hinuma-2017': 'Y. Hinuma et al., Comput. Mater. Sci. 128, 140 (2017).',
  'bradley-cracknell-1972':
    'C. J. Bradley and A. P. Cracknell, The Mathematical Theory of Symmetry in Solids (1972), table 3.6.',
  none: 'No label book: the file defines every label that it uses.',
}

const CENTRING_MEANINGS: Record<Centring, string> = {
  P: 'Primitive: lattice points at the corners only.',
  A: 'Centred on the faces of b and c.',
  B: 'Centred on the faces of a and c.',
  C: 'Centred on the faces of a and b.',
  I: 'Centred in the body.',
  F: 'Centred on all faces.',
  R: 'Rhombohedral, on hexagonal axes in the obverse setting.',
}

/** Spellings of the trade that are no Pearson symbols of the format. */
const READ_AS: Readonly<Record<string, readonly string[]>> = { oC: ['oS'], mC: ['mS'] }
const MEANT: Readonly<Record<string, readonly string[]>> = {
  cP: ['sc', 'cubic', 'simple cubic'],
  cF: ['fcc', 'face-centred cubic', 'face-centered cubic'],
  cI: ['bcc', 'body-centred cubic', 'body-centered cubic'],
  tP: ['tetragonal', 'st'],
  tI: ['bct', 'body-centred tetragonal'],
  oP: ['orthorhombic'],
  hP: ['hex', 'hcp', 'hexagonal'],
  hR: ['rhombohedral', 'trigonal', 'rho'],
  mP: ['monoclinic'],
  aP: ['triclinic'],
  tp: ['square'],
  op: ['rectangular'],
  oc: ['centred rectangular', 'centered rectangular'],
  mp: ['oblique'],
}

const BRAVAIS_WORDS: readonly Word[] = BRAVAIS_TYPES.map(type => {
  const { words, free } = BRAVAIS[type]
  const sets = free.map(set => set.join(' ')).join(', or ')
  return {
    word: type,
    meaning: `${words[0].toUpperCase()}${words.slice(1)}; takes ${sets}.`,
    also: READ_AS[type],
    meant: MEANT[type],
  }
})

const parameter = (name: string, doc: string): KeyRow => ({
  path: `lattice.${name}`,
  kind: 'number',
  doc,
  example: '5.43',
  quantity: 'length',
  positive: true,
})
const angleOf = (name: string, between: string, letter: string): KeyRow => ({
  path: `lattice.${name}`,
  kind: 'number',
  doc: `Angle ${letter} between ${between}, in degrees.`,
  example: '90',
  quantity: 'angle',
  positive: true,
})

export const KEYS: readonly KeyRow[] = [
  {
    path: 'title',
    kind: 'text',
    doc: 'What the crystal is called in reports and figures.',
    example: 'Lead telluride',
  },
  {
    path: 'unit',
    kind: 'word',
    doc: 'The unit of every length in the document. Reciprocal quantities are in its inverse, with the factor 2π.',
    example: 'angstrom',
    default: 'angstrom',
    words: [
      {
        word: 'angstrom',
        meaning: 'Å = 10⁻¹⁰ m.',
        meant: [
          'Å',
          'Å',
          'A',
          'ang',
          'angstroms',
          'Ångström',
          'ångström',
          'Angström',
          'angstroem',
          'Ångstrom',
        ],
      },
      {
        word: 'nm',
        meaning: 'Nanometre, 10 Å.',
        meant: ['nanometre', 'nanometer', 'nanometres', 'nanometers'],
      },
      {
        word: 'bohr',
        meaning: 'Bohr radius, 0.529177 Å.',
        meant: ['a0', 'a₀', 'au', 'a.u.', 'bohrs', 'atomic'],
      },
    ],
  },
  {
    path: 'tolerance',
    kind: 'number',
    doc: 'How far an atom or the lattice may be from symmetric and still count as symmetric.',
    example: '0.001',
    default: '0.001 Å',
    quantity: 'length',
    positive: true,
  },
  {
    path: 'lattice',
    kind: 'mapping',
    required: true,
    doc: 'The lattice: by its Bravais type and parameters, or by its vectors.',
    example: '{bravais: cF, a: 5.43}',
    skeleton: '\n  bravais: ${1:cF}\n  a: ${2:5.43}',
  },
  {
    path: 'lattice.bravais',
    kind: 'word',
    doc: 'Pearson symbol of the lattice. It says which parameters are free; beside `vectors` it is a claim to be checked.',
    example: 'cF',
    words: BRAVAIS_WORDS,
  },
  parameter(
    'a',
    'Length of the conventional axis a; for `hR` with `alpha`, of the rhombohedral axes. Usable as `a` in every number.',
  ),
  parameter('b', 'Length of the conventional axis b. Usable as `b` in every number.'),
  parameter('c', 'Length of the conventional axis c. Usable as `c` in every number.'),
  angleOf('alpha', 'b and c', 'α'),
  angleOf('beta', 'a and c', 'β'),
  angleOf('gamma', 'a and b', 'γ'),
  {
    path: 'lattice.height',
    kind: 'number',
    doc: 'Period of the computing cell along the normal of a plane lattice. The third number of an atom is then a fraction of it.',
    example: '20',
    quantity: 'length',
    positive: true,
    where: 'in two dimensions',
  },
  {
    path: 'lattice.vectors',
    kind: 'rows',
    doc: 'One, two or three Cartesian lattice vectors, one a row. Plane vectors lie in xy, a chain’s along x.',
    example: '[[0, a/2, a/2], [a/2, 0, a/2], [a/2, a/2, 0]]',
    quantity: 'length',
    skeleton:
      '\n    - [${1:1}, ${2:0}, ${3:0}]\n    - [${4:0}, ${5:1}, ${6:0}]\n    - [${7:0}, ${8:0}, ${9:1}]',
  },
  {
    path: 'lattice.centring',
    kind: 'word',
    doc: 'Says that the rows of `vectors` are a conventional cell with this centring.',
    example: 'F',
    default: 'none: the vectors are primitive',
    words: CENTRINGS.map(word => ({ word, meaning: CENTRING_MEANINGS[word] })),
    where: 'beside `vectors`',
  },
  {
    path: 'atoms',
    kind: 'atoms',
    doc: 'The basis of the crystal, one atom an item: one copy at each lattice point, centring translations never written out.',
    example: '[Si: [0, 0, 0], Si: [1/4, 1/4, 1/4]]',
    skeleton: '\n  - ${1:Si}: [${2:0}, ${3:0}, ${4:0}]',
  },
  {
    path: 'atoms.*',
    kind: 'atom',
    doc: 'Place of an atom of this element, in the frame that `frames: {atoms: …}` states.',
    example: '[1/4, 1/4, 1/4]',
    quantity: 'fraction',
    length: 3,
  },
  {
    path: 'atoms.*.at',
    kind: 'vector',
    required: true,
    doc: 'Place of the atom, in the frame that `frames: {atoms: …}` states.',
    example: '[1/4, 1/4, 1/4]',
    quantity: 'fraction',
    length: 3,
  },
  {
    path: 'atoms.*.name',
    kind: 'text',
    doc: 'Tells like atoms apart: atoms of different names are never equivalent.',
    example: 'Fe_up',
  },
  {
    path: 'space-group',
    kind: 'space-group',
    doc: 'A claim to be checked: the number of a space group, 1 to 230, or its Hermann–Mauguin symbol.',
    example: 'Fm-3m',
    default: 'not claimed',
    where: 'in three dimensions',
  },
  {
    path: 'time-reversal',
    kind: 'word',
    doc: 'Are k and −k equivalent by time reversal?',
    example: 'yes',
    default: 'yes',
    words: [
      { word: 'yes', meaning: 'k and −k are equivalent.', also: ['true'], meant: ['on', 'y'] },
      {
        word: 'no',
        meaning:
          'Only where no operation of the magnetic group takes k to −k, as in a non-centrosymmetric ferromagnet with spin–orbit coupling.',
        also: ['false'],
        meant: ['off', 'n'],
      },
    ],
  },
  {
    path: 'frames',
    kind: 'mapping',
    doc: 'Which axes fractional numbers refer to.',
    example: '{atoms: conventional, points: primitive}',
    skeleton: '\n  ${1|atoms,points|}: ${2|conventional,primitive,cartesian|}',
  },
  {
    path: 'frames.atoms',
    kind: 'word',
    doc: 'Axes of the atoms’ coordinates.',
    example: 'conventional',
    default: 'conventional',
    words: [
      { word: 'conventional', meaning: 'Fractions of the conventional cell a, b, c.' },
      {
        word: 'primitive',
        meaning: 'Fractions of the primitive vectors.',
        meant: ['fractional', 'reduced', 'crystal'],
      },
      { word: 'cartesian', meaning: 'Lengths along x, y, z.', meant: ['absolute'] },
    ],
  },
  {
    path: 'frames.points',
    kind: 'word',
    doc: 'Axes of the k-points’ coordinates.',
    example: 'primitive',
    default: 'primitive',
    words: [
      {
        word: 'primitive',
        meaning: 'Fractions of the primitive reciprocal vectors.',
        meant: ['fractional', 'reduced', 'crystal'],
      },
      { word: 'conventional', meaning: 'Fractions of the reciprocal vectors of the conventional cell.' },
      {
        word: 'cartesian',
        meaning: 'Inverse length along x, y, z, with the factor 2π.',
        meant: ['absolute'],
      },
      {
        word: '2pi/a',
        meaning: 'Along x, y, z in units of 2π/a; needs the parameter `a`.',
        meant: ['2π/a', '2*pi/a', '2pi/alat'],
      },
    ],
  },
  {
    path: 'labels',
    kind: 'word',
    doc: 'The label book: whose letters name the symmetry points. The same letter means different points in different books.',
    example: 'hinuma-2017',
    default: 'setyawan-curtarolo-2010',
    words: BOOK_IDS.map(word => ({ word, meaning: BOOKS[word] })),
  },
  {
    path: 'points',
    kind: 'points',
    doc: 'k-points of the file’s own, by label. A label means the file’s own point where there is one, else the book’s.',
    example: '{Q: [1/4, 1/4, 0]}',
    default: 'from the label book',
    skeleton: '\n  ${1:Q}: [${2:1/4}, ${3:1/4}, ${4:0}]',
  },
  {
    path: 'points.*',
    kind: 'point',
    doc: 'Coordinates of a k-point in the frame that `frames: {points: …}` states, or a place between two other points.',
    example: '[1/2, 0, 1/2]',
    quantity: 'fraction',
  },
  {
    path: 'points.*.between',
    kind: 'ends',
    required: true,
    doc: 'The labels of two points; the new point lies on the straight line through them.',
    example: '[Γ, X]',
  },
  {
    path: 'points.*.at',
    kind: 'number',
    required: true,
    doc: 'How far along the line: 0 is the first point, 1 the second.',
    example: '0.85',
    quantity: 'fraction',
  },
  {
    path: 'path',
    kind: 'path',
    doc: 'The path through k-space: labels joined by `–`, with `|` where it breaks; `–(40)–` gives a segment its own number of steps. `recommended` is the label book’s own path.',
    example: 'Γ – X – W | U – X',
    default: 'none',
    skeleton: ' ${1:Γ – X}',
  },
  {
    path: 'sampling',
    kind: 'mapping',
    doc: 'How densely the path is sampled: state one of `spacing`, `steps`, `total`.',
    example: '{spacing: 0.02}',
    default: 'spacing 0.02 Å⁻¹',
    skeleton: '\n  spacing: ${1:0.02}',
  },
  {
    path: 'sampling.spacing',
    kind: 'number',
    doc: 'Largest distance between neighbouring k-points on the path.',
    example: '0.02',
    default: '0.02 Å⁻¹',
    quantity: 'inverse length',
    positive: true,
  },
  { path: 'sampling.steps', kind: 'count', doc: 'Number of steps in every segment.', example: '40' },
  {
    path: 'sampling.total',
    kind: 'count',
    doc: 'Number of steps of the whole path, shared out by length.',
    example: '400',
  },
  {
    path: 'mesh',
    kind: 'meshes',
    doc: 'A mesh of k-points over the primitive reciprocal cell, or several by name.',
    example: '{divisions: [12, 12, 12]}',
    default: 'none',
    skeleton: '\n  divisions: [${1:8}, ${2:8}, ${3:8}]',
  },
  {
    path: 'mesh.divisions',
    kind: 'counts',
    doc: 'Number of points along each primitive reciprocal vector.',
    example: '[12, 12, 12]',
  },
  {
    path: 'mesh.spacing',
    kind: 'number',
    doc: 'Largest distance between neighbouring mesh points along each reciprocal vector, instead of `divisions`.',
    example: '0.2',
    quantity: 'inverse length',
    positive: true,
  },
  {
    path: 'mesh.shift',
    kind: 'vector',
    doc: 'Shift of the whole mesh in steps of its own; 1/2 is half a step.',
    example: '[0, 1/2, 1/2]',
    default: '[0, 0, 0]',
    quantity: 'mesh step',
  },
  {
    path: 'supercell',
    kind: 'matrix',
    doc: 'Whole-numbered matrix: each row is a new vector as a combination of the primitive ones. One list of three for a diagonal matrix.',
    example: '[2, 2, 2]',
    default: 'none',
    skeleton: ' [${1:2}, ${2:2}, ${3:2}]',
  },
  {
    path: 'checks',
    kind: 'severities',
    doc: 'Severities of rules in this document, by the rule’s id.',
    example: '{mesh-uneven: off}',
    default: 'each rule’s own',
    skeleton: '\n  ${1:rule}: ${2|off,info,warning,error|}',
  },
  {
    path: 'checks.*',
    kind: 'word',
    doc: 'Severity of this rule here.',
    example: 'off',
    words: [
      { word: 'off', meaning: 'The rule is silent.', meant: ['false', 'no', 'none', 'ignore', 'never'] },
      { word: 'info', meaning: 'Worth knowing.', meant: ['information', 'hint', 'note'] },
      {
        word: 'warning',
        meaning: 'A job would probably be wrong or wasted.',
        meant: ['warn', 'true', 'yes', 'on'],
      },
      { word: 'error', meaning: 'The file cannot mean what it says.', meant: ['err', 'fatal'] },
    ],
  },
]

const BY_PATH: ReadonlyMap<string, KeyRow> = new Map(KEYS.map(row => [row.path, row]))
/** The path of the mapping that a row's key stands in; `''` is the document itself. */
export function parentPath({ path }: KeyRow): string {
  return path.slice(0, Math.max(0, path.lastIndexOf('.')))
}

const BELOW: ReadonlyMap<string, readonly KeyRow[]> = new Map(
  ['', ...BY_PATH.keys()].map(path => [
    path,
    KEYS.filter(row => parentPath(row) === path && keyName(row) !== '*'),
  ]),
)

/** The row of exactly this path, such as `lattice.a` or `points.*`. */
export const keyRow = (path: string): KeyRow | undefined => BY_PATH.get(path)

/** The last name of a row's path. */
export function keyName({ path }: KeyRow): string {
  return path.slice(path.lastIndexOf('.') + 1)
}

/** The rows of the keys that may stand in a mapping, in the usual order; `''` is the document itself. */
export const keysBelow = (path: string): readonly KeyRow[] => BELOW.get(path) ?? []

/**
 * The row that a key of a file belongs to. `names` are the keys from the top as they stand in the file; a list's
 * items count for nothing: the element of an atom is `['atoms', 'Si']`, a named mesh's shift `['mesh', 'fine', 'shift']`.
 */
export function findKey(names: readonly string[]): KeyRow | undefined {
  let path = ''
  for (const [i, name] of names.entries()) {
    const own = i === 0 ? name : `${path}.${name}`
    if (BY_PATH.has(own)) path = own
    else if (BY_PATH.has(`${path}.*`)) path = `${path}.*`
    else if (path === 'mesh' && i === 1)
      continue // A mesh of a name of its own: its keys are those of `mesh`.
    else return undefined
  }
  return BY_PATH.get(path)
}

const UNITS: Record<Quantity, string> = {
  length: 'in the unit of the file',
  'inverse length': 'in the inverse unit of the file, with 2π',
  angle: 'in degrees',
  fraction: '',
  'mesh step': 'in steps of the mesh',
}

const KINDS: Record<ValueKind, string> = {
  text: 'text',
  word: 'one of the words below',
  number: 'number',
  count: 'whole number from 1',
  vector: 'list of numbers',
  counts: 'list of whole numbers from 1',
  rows: 'one, two or three rows of numbers',
  matrix: 'list of whole numbers, or rows of them',
  ends: 'list of two labels',
  mapping: 'mapping',
  atoms: 'list of `ELEMENT: [x, y, z]`',
  atom: 'list of three numbers, or `{at: [x, y, z], name: text}`',
  'space-group': 'number or symbol',
  points: 'mapping `LABEL: [k1, k2, k3]`',
  point: 'list of numbers, or `{between: [LABEL, LABEL], at: number}`',
  path: 'text, list of texts, or `recommended`',
  meshes: 'mapping',
  severities: 'mapping of rules to severities',
}

/** What sort of value a row takes, in words. */
export function describeValue({ kind, quantity }: KeyRow): string {
  const unit = quantity && UNITS[quantity]
  return unit ? `${KINDS[kind]} ${unit}` : KINDS[kind]
}

/** What the names of the user's own are names of. */
const OWN_NAMES: Readonly<Record<string, string>> = { atoms: 'ELEMENT', points: 'LABEL', checks: 'RULE' }

/** More words than this are not listed one a line. */
const LISTED_WORDS = 5

/** Markdown about a key, for hover and completion. `names` as in `findKey`. */
export function keyDocumentation(names: readonly string[]): string | undefined {
  const row = findKey(names)
  return row && documentation(row)
}

export function documentation(row: KeyRow): string {
  const path = row.path.replace('*', OWN_NAMES[row.path.split('.')[0]])
  const lines = [`**${path}** · ${describeValue(row)}`, '', row.doc]
  const facts = [
    row.required ? 'Required.' : row.default !== undefined ? `Default: ${row.default}.` : '',
    row.where ? `Stands ${row.where} only.` : '',
  ].filter(Boolean)
  if (facts.length > 0) lines.push('', facts.join(' '))
  if (row.words && row.words.length <= LISTED_WORDS)
    lines.push('', ...row.words.map(({ word, meaning }) => `- \`${word}\`: ${meaning}`))
  else if (row.words) lines.push('', row.words.map(({ word }) => `\`${word}\``).join(' '))
  lines.push('', `Example: \`${path.slice(path.lastIndexOf('.') + 1)}: ${row.example}\``)
  return lines.join('\n')
}
