/** Which lattice types are special cases of which. */
import {
  BRAVAIS,
  BRAVAIS_TYPES,
  type BravaisType,
  completeCell,
  type GivenParameters,
} from '../../crystal/bravais.ts'
import type { Crystal } from '../../meaning/crystal.ts'

/** One of the 14 types (5 in the plane): centrings of one face are one type in three settings. */
export function classOf(type: BravaisType): BravaisType {
  if (type === 'oA' || type === 'oB') return 'oC'
  if (type === 'mA' || type === 'mB' || type === 'mI') return 'mC'
  return type
}

/**
 * The types of which a lattice is a special case: its holohedry contains one of theirs, and its vectors are centred
 * alike on those axes (H. Burzlaff and H. Zimmermann, Z. Kristallogr. 170, 247, 1985; from memory).
 */
const GENERAL: Partial<Record<BravaisType, readonly BravaisType[]>> = {
  cP: ['tP', 'hR', 'oP', 'oC', 'mP', 'mC', 'aP'],
  cI: ['tI', 'hR', 'oI', 'oF', 'mC', 'aP'],
  cF: ['tI', 'hR', 'oF', 'oI', 'mC', 'aP'],
  hP: ['oC', 'mP', 'mC', 'aP'],
  hR: ['mC', 'aP'],
  tP: ['oP', 'oC', 'mP', 'mC', 'aP'],
  tI: ['oI', 'oF', 'mC', 'aP'],
  oP: ['mP', 'aP'],
  oC: ['mP', 'mC', 'aP'],
  oF: ['mC', 'aP'],
  oI: ['mC', 'aP'],
  mP: ['aP'],
  mC: ['aP'],
  hp: ['oc', 'mp'],
  tp: ['op', 'oc', 'mp'],
  op: ['mp'],
  oc: ['mp'],
}

/** A lattice found to be of type `found` is more symmetric than one of type `stated` need be. */
export const isSpecialCase = (found: BravaisType, stated: BravaisType): boolean =>
  GENERAL[classOf(found)]?.includes(classOf(stated)) ?? false

export const isSameType = (x: BravaisType, y: BravaisType): boolean => classOf(x) === classOf(y)

/** The vectors span another type than the one stated beside them: then the cell itself is in doubt. */
export function contradictsVectors({ document, type, dimension }: Crystal): boolean {
  const { bravais, vectors } = document.lattice ?? {}
  if (!bravais || !vectors || !type?.bravais) return false
  if (BRAVAIS[bravais.value].dimension !== dimension) return true
  return !isSameType(type.bravais, bravais.value) && !isSpecialCase(type.bravais, bravais.value)
}

/** The most symmetric type of the same centring that parameters agree with; a type's own name aside. */
export function typeThatFits(stated: BravaisType, given: GivenParameters): BravaisType | undefined {
  const { dimension, centring } = BRAVAIS[stated]
  return BRAVAIS_TYPES.find(type => {
    const info = BRAVAIS[type]
    if (type === stated || info.dimension !== dimension || info.centring !== centring) return false
    const completed = completeCell(type, given)
    return 'cell' in completed && completed.contradictions.length === 0
  })
}

/** `tP (simple tetragonal)` */
export const named = (type: BravaisType): string => `${type} (${BRAVAIS[type].words})`
