import type { Vec3 } from '../../crystal/vector.ts'
import { combine } from '../../crystal/vector.ts'
import type { Fix, NumberValue } from '../../format/model.ts'
import { plusWhole, rational, sumOf, writeSum } from '../../meaning/combinations.ts'
import type { Crystal } from '../../meaning/crystal.ts'
import type { Check } from '../check.ts'
import { coincidences } from '../atoms/contacts.ts'
import { moreSymmetric } from '../atoms/suspicions.ts'

interface Facts {
  /** Numbers of symmetry operations as read, and in the reverse setting. */
  readonly operations: number
  readonly reversed: number
}

export const latticeReverseSetting: Check<Facts> = {
  id: 'lattice-reverse-setting',
  severity: 'warning',
  needs: ['frames.atoms'],
  summary:
    'The atoms of a rhombohedral crystal are far more symmetric when its hexagonal axes are read in the reverse setting.',
  why: 'Hexagonal axes here are obverse, with lattice points at (2/3, 1/3, 1/3): coordinates of the other setting give another crystal.',
  wrong:
    'lattice: {bravais: hR, a: 4.38, c: 30.5}\natoms:\n  - Te: [0, 0, 0]\n  - Te: [0, 0, 0.21]\n  - Te: [1/3, 2/3, 1/3 - 0.21]\n  - Bi: [0, 0, 0.4]\n  - Bi: [1/3, 2/3, 1/3 - 0.4]\n',
  right:
    'lattice: {bravais: hR, a: 4.38, c: 30.5}\natoms:\n  - Te: [0, 0, 0]\n  - Te: [0, 0, 0.21]\n  - Te: [2/3, 1/3, 1/3 - 0.21]\n  - Bi: [0, 0, 0.4]\n  - Bi: [2/3, 1/3, 1/3 - 0.4]\n',
  *run({ crystal, document }) {
    const { lattice, atoms } = crystal
    const block = document.lattice
    const at = block?.centring?.at ?? block?.bravais?.at
    if (!at || lattice?.centring !== 'R' || document.frames.atoms !== 'conventional' || atoms.length < 2)
      return
    if (!crystal.atomsComplete || coincidences(crystal).length > 0) return
    const other = moreSymmetric(crystal, reversed(crystal))
    if (!other) return
    const { now, then } = other
    yield {
      at,
      message: `As read, in the obverse setting, the crystal has ${now} symmetry operations; read in the reverse setting it has ${then}. The coordinates seem to be those of the reverse setting: x and y change their sign.`,
      facts: { operations: now, reversed: then },
      fixes: [rewritten(crystal)],
    }
  },
}

/** Half a turn about c leads from one setting to the other. */
const reversed = ({ atoms, lattice }: Crystal): Vec3[] =>
  atoms.map(({ stated: [x, y, z] }) => combine([-x, -y, z], lattice!.conventionalFromPrimitive))

function rewritten({ atoms }: Crystal): Fix {
  const edits = atoms.flatMap(({ entry }) =>
    entry.position!.items.slice(0, 2).map(item => {
      const number = item as NumberValue
      const turned = sumOf([number], [rational(-1)])
      return { at: number.at, text: writeSum(plusWhole(turned, -Math.floor(turned.value)), () => true) }
    }),
  )
  return { title: 'Write the coordinates in the obverse setting', safe: false, edits }
}
