import { BRAVAIS, type BravaisType, completeCell } from '../../crystal/bravais.ts'
import { isLattice, latticeFromCell } from '../../crystal/lattice.ts'
import type { Fix, LatticeBlock, NumberValue, TextEdit, VectorValue } from '../../format/model.ts'
import { replaceVector } from '../../format/edits.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import { length } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'
import { suspectedFrame, isScaleSuspected } from './suspicions.ts'

interface Facts {
  /** Which primitive vector leads through the gap, from 0. */
  readonly axis: number
  /** In the file's unit. */
  readonly gap: number
}

/** In Å: wider than between the layers of any layered crystal (graphite 3.35, intercalated ones up to 8). */
export const WIDE_GAP = 8

export const vacuumUndeclared: Check<Facts> = {
  id: 'vacuum-undeclared',
  severity: 'info',
  needs: ['unit', 'frames.atoms'],
  summary: 'A three-dimensional cell has a gap of over 8 Å between its atoms: it is meant as a sheet.',
  why: 'Labels, zone and path are those of a crystal in three dimensions, with a direction along which nothing happens.',
  wrong: 'lattice: {bravais: hP, a: 2.46, c: 20}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\n',
  right:
    'lattice: {bravais: hp, a: 2.46, height: 20}\natoms:\n  - C: [1/3, 2/3, 1/2]\n  - C: [2/3, 1/3, 1/2]\n',
  *run(context) {
    const { crystal, document } = context
    const block = document.lattice
    if (crystal.dimension !== 3 || !block || !crystal.atomsComplete) return
    if (suspectedFrame(crystal) || isScaleSuspected(crystal)) return
    const wide = crystal.emptySlabs.flatMap((gap, axis) =>
      gap !== undefined && gap * crystal.angstrom > WIDE_GAP ? [{ axis, gap }] : [],
    )
    if (wide.length !== 1) return // A molecule or a chain in a box is no sheet.
    const [{ axis, gap }] = wide
    yield {
      at: block.bravais?.at ?? block.vectors!.at,
      message: `There are ${length(gap, crystal.unit, 2)} without atoms across the ${ORDINAL[axis]} primitive vector: a sheet is better stated in two dimensions, with this period as its \`height\`.`,
      facts: { axis, gap },
      fixes: axis === 2 ? fixesFor(context) : [],
    }
  },
}

const ORDINAL = ['first', 'second', 'third']

/** The plane type that is left of a type whose c stands at right angles to a and b. */
const IN_PLANE: Partial<Record<BravaisType, BravaisType>> = {
  hP: 'hp',
  tP: 'tp',
  oP: 'op',
  oC: 'oc',
  mP: 'mp',
}

/** By type only, and only where nothing in the file has a part along c. */
function fixesFor({ crystal, text }: Context): Fix[] {
  const { document } = crystal
  const block = document.lattice!
  const plane = block.bravais && IN_PLANE[block.bravais.value]
  if (!plane || !isFlat(crystal, block, plane)) return []
  const edits: TextEdit[] = [
    { at: block.bravais!.at, text: plane },
    { at: block.keys.get('c')!.key, text: 'height' },
    ...document.meshes.flatMap(({ divisions }) =>
      divisions?.items.length === 3 ? replaceVector(text, divisions, [undefined, undefined, '1']) : [],
    ),
  ]
  return [{ title: `State it as a sheet (${plane}) with \`height\``, safe: false, edits }]
}

function isFlat(crystal: Crystal, block: LatticeBlock, plane: BravaisType): boolean {
  const { document } = crystal
  const stated = Object.keys(block.parameters)
  const free = BRAVAIS[plane].free[0]
  if (!block.parameters.c || !stated.every(name => name === 'c' || free.some(other => other === name)))
    return false
  if (document.spaceGroup || document.supercell) return false
  const vectors = [
    ...(document.points?.items ?? []).map(({ coordinates }) => coordinates),
    ...document.meshes.map(({ shift }) => shift),
  ].filter(vector => vector !== undefined)
  const positions = crystal.atoms.map(({ entry }) => entry.position!)
  const usesC = [...vectors, ...positions].some(vector =>
    numbersOf(vector).some(({ uses }) => uses.includes('c')),
  )
  return (
    !usesC &&
    vectors.every(({ items }) => !items[2] || items[2].value === 0) &&
    labelsAreThere(crystal, block, plane)
  )
}

const numbersOf = ({ items }: VectorValue): NumberValue[] => items.filter(item => item !== undefined)

/** The labels of the path are those of the plane lattice too. */
function labelsAreThere(crystal: Crystal, { parameters }: LatticeBlock, plane: BravaisType): boolean {
  const { document } = crystal
  const labels = (document.path?.pieces ?? []).flatMap(piece => piece.labels.map(({ label }) => label))
  const fromBook = labels.filter(label => !crystal.fileDefines(label))
  if (fromBook.length === 0 || document.labels === 'none') return true
  const completed = completeCell(plane, {
    a: parameters.a?.value,
    b: parameters.b?.value,
    gamma: parameters.gamma?.value,
  })
  const lattice = 'cell' in completed && latticeFromCell(completed.cell, BRAVAIS[plane].centring, 2)
  if (!lattice || !isLattice(lattice)) return false
  const known = new Set(crystal.bookMatch(document.labels, lattice)?.points.map(({ label }) => label))
  return fromBook.every(label => known.has(label))
}
