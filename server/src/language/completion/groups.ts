/** Space groups by symbol and number, those of the lattice's own type first. */
import { CompletionItemKind } from 'vscode-languageserver-types'
import { BRAVAIS, type BravaisType } from '../../crystal/bravais.ts'
import { LAST_SPACE_GROUP, namedSpaceGroup } from '../../crystal/space-group.ts'
import { anyFace } from '../../meaning/lattice-build.ts'
import type { Asked, Offer } from './item.ts'

interface Row {
  readonly number: number
  readonly symbol: string
  readonly pointGroup: string
  readonly bravais: BravaisType
}

let rows: readonly Row[] | undefined
const groups = (): readonly Row[] =>
  (rows ??= Array.from({ length: LAST_SPACE_GROUP }, (_, i) => namedSpaceGroup(i + 1)!))

/** Which lattice systems a lattice of some system can be a special case of. */
const CARRIES: Readonly<Record<string, readonly string[]>> = {
  cubic: ['cubic', 'tetragonal', 'orthorhombic', 'rhombohedral', 'monoclinic', 'triclinic'],
  tetragonal: ['tetragonal', 'orthorhombic', 'monoclinic', 'triclinic'],
  orthorhombic: ['orthorhombic', 'monoclinic', 'triclinic'],
  hexagonal: ['hexagonal', 'orthorhombic', 'monoclinic', 'triclinic'],
  rhombohedral: ['rhombohedral', 'monoclinic', 'triclinic'],
  monoclinic: ['monoclinic', 'triclinic'],
  triclinic: ['triclinic'],
}

export function groupOffers({ snapshot, offset, place }: Asked): Offer[] {
  const own = snapshot.documentAt(offset)?.crystal.bravais
  const system = own && BRAVAIS[own].system
  const byNumber = /^\d+$/.test(place.written)
  return groups().map(({ number, symbol, pointGroup, bravais }) => {
    const rank =
      !own || bravais === anyFace(own) ? 1 : CARRIES[system!]?.includes(BRAVAIS[bravais].system) ? 3 : 6
    const detail = `${byNumber ? symbol : number} · ${pointGroup} · ${BRAVAIS[bravais].words}`
    return {
      label: byNumber ? String(number) : symbol,
      kind: CompletionItemKind.EnumMember,
      detail,
      filter: byNumber || place.written ? (byNumber ? String(number) : symbol) : `${symbol} ${number}`,
      rank,
      text: byNumber ? String(number) : symbol,
      about: `group:${number}`,
    }
  })
}
