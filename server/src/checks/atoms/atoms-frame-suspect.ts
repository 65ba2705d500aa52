import type { AtomFrame } from '../../format/model.ts'
import { insertKeys } from '../../format/edits.ts'
import { length } from '../../meaning/wording.ts'
import type { Check, Context } from '../check.ts'
import { suspectedFrame } from './suspicions.ts'

interface Facts {
  readonly frame: AtomFrame
}

const MEANING: Record<AtomFrame, string> = {
  cartesian: 'Cartesian lengths',
  conventional: 'fractions of the conventional cell',
  primitive: 'fractions of the primitive cell',
}

export const atomsFrameSuspect: Check<Facts> = {
  id: 'atoms-frame-suspect',
  severity: 'warning',
  summary: 'The atoms’ coordinates make sense in another frame than the one in force.',
  why: 'Lengths read as fractions, or fractions as lengths, put the atoms of another crystal into the cell.',
  wrong:
    'lattice: {bravais: hP, a: 3.25, c: 5.2}\natoms:\n  - Zn: [0, 1.8764, 0]\n  - Zn: [1.625, 0.9382, 2.6]\n  - O: [0, 1.8764, 1.976]\n  - O: [1.625, 0.9382, 4.576]\n',
  right:
    'lattice: {bravais: hP, a: 3.25, c: 5.2}\nframes: {atoms: cartesian}\natoms:\n  - Zn: [0, 1.8764, 0]\n  - Zn: [1.625, 0.9382, 2.6]\n  - O: [0, 1.8764, 1.976]\n  - O: [1.625, 0.9382, 4.576]\n',
  *run(context) {
    const { crystal, document } = context
    const suspicion = suspectedFrame(crystal)
    if (!suspicion) return
    const { frame, contact } = suspicion
    const now = document.frames.atoms
    const why =
      now === 'cartesian'
        ? 'all of them are under 1 and would put atoms on top of each other'
        : 'some are beyond ±2'
    yield {
      at: document.framesEntry?.atoms?.at ?? document.atoms!.key,
      message: `The atoms’ coordinates can hardly be ${MEANING[now]}: ${why}. Read as ${MEANING[frame]} they give ordinary distances, ${contact.first.element}–${contact.second.element} ${length(contact.distance, crystal.unit, 3)}.`,
      facts: { frame },
      fixes: [
        { title: `State \`frames: {atoms: ${frame}}\``, safe: false, edits: statement(context, frame) },
      ],
    }
  },
}

function statement({ document, text }: Context, frame: AtomFrame) {
  const { framesEntry } = document
  if (framesEntry?.atoms) return [{ at: framesEntry.atoms.at, text: frame }]
  return framesEntry
    ? insertKeys(text, framesEntry, [['atoms', frame]])
    : insertKeys(text, document, [['frames', `{atoms: ${frame}}`]])
}
