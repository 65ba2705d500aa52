import type { AtomFrame, Fix } from '../../format/model.ts'
import { insertKeys } from '../../format/edits.ts'
import { length } from '../../meaning/wording.ts'
import type { Check, Context, Finding } from '../check.ts'
import { suspectedFrame, suspectedPrimitive } from './suspicions.ts'

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
  needs: ['unit', 'frames.atoms'],
  summary: 'The atoms’ coordinates make sense in another frame than the one in force.',
  why: 'Lengths read as fractions, or fractions as lengths, put the atoms of another crystal into the cell.',
  wrong:
    'lattice: {bravais: hP, a: 3.25, c: 5.2}\natoms:\n  - Zn: [0, 1.8764, 0]\n  - Zn: [1.625, 0.9382, 2.6]\n  - O: [0, 1.8764, 1.976]\n  - O: [1.625, 0.9382, 4.576]\n',
  right:
    'lattice: {bravais: hP, a: 3.25, c: 5.2}\nframes: {atoms: cartesian}\natoms:\n  - Zn: [0, 1.8764, 0]\n  - Zn: [1.625, 0.9382, 2.6]\n  - O: [0, 1.8764, 1.976]\n  - O: [1.625, 0.9382, 4.576]\n',
  *run(context) {
    yield* byDistances(context)
    yield* bySymmetry(context)
  },
}

function* byDistances(context: Context): Iterable<Finding<Facts>> {
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
    fixes: [fixFor(context, frame)],
  }
}

/** Fractions of the primitive cell under a centred lattice: the distances may be those of a solid, the symmetry is lost. */
function* bySymmetry(context: Context): Iterable<Finding<Facts>> {
  const { crystal, document } = context
  const other = suspectedPrimitive(crystal)
  if (!other) return
  yield {
    at: document.atoms!.key,
    message: `Read as ${MEANING.conventional}, as no frame is stated, the atoms have ${other.now} symmetry operations; read as ${MEANING.primitive} they have ${other.then}. The coordinates seem to be primitive ones.`,
    facts: { frame: 'primitive' },
    fixes: [fixFor(context, 'primitive')],
  }
}

const fixFor = (context: Context, frame: AtomFrame): Fix => ({
  title: `State \`frames: {atoms: ${frame}}\``,
  safe: false,
  edits: statement(context, frame),
})

function statement({ document, text }: Context, frame: AtomFrame) {
  const { framesEntry } = document
  if (framesEntry?.atoms) return [{ at: framesEntry.atoms.at, text: frame }]
  return framesEntry
    ? insertKeys(text, framesEntry, [['atoms', frame]])
    : insertKeys(text, document, [['frames', `{atoms: ${frame}}`]])
}
