import { basename } from 'node:path'
import { exportCif } from '../exchange/cif/write.ts'
import { Refusal } from './io.ts'
import { Desk } from './output.ts'
import { onePick } from './pick.ts'
import { type Call, CLEAN, DOCUMENT, OUTPUT, OVERWRITE, type Verb } from './verb.ts'
import { VERSION } from './version.ts'

export const exportVerb: Verb = {
  name: 'export',
  operands: 'FILE',
  summary: 'the crystal of a lattice file as a CIF',
  about: [
    "Writes a Crystallographic Information File (IUCr; CIF 1.1): the file's conventional cell in Å, the space group, the operations of that cell, and one atom of each set of equivalent ones. Points, path and mesh have no place in a CIF.",
    'A sheet is written with its `height` as the third period; a chain is refused.',
  ],
  options: [DOCUMENT, OUTPUT, OVERWRITE],
  examples: ['braggline export lead-telluride.lattice.yaml -o PbTe.cif'],

  async run({ given, io, engine }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const { crystal } = await onePick(given, io, engine)
    const source = given.operands[0] === '-' ? 'standard input' : basename(given.operands[0])
    const written = exportCif(crystal, { source, version: VERSION })
    if ('refusal' in written) throw new Refusal(written.refusal)
    for (const note of written.notes) desk.note(`note: ${note}\n`)
    desk.result(written.text)
    await desk.close()
    return CLEAN
  },
}
