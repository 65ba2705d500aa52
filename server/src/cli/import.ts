import { importCif } from '../exchange/cif/import.ts'
import { harmless } from '../exchange/layout.ts'
import { basename } from 'node:path'
import { readText, STANDARD_INPUT } from './files.ts'
import { Refusal } from './io.ts'
import { Desk } from './output.ts'
import { type Call, CLEAN, FOUND, NOT_DONE, OUTPUT, OVERWRITE, type Verb } from './verb.ts'

export const importVerb: Verb = {
  name: 'import',
  operands: 'STRUCTURE.cif',
  summary: 'a CIF as a lattice file',
  about: [
    'Reads a Crystallographic Information File (IUCr; CIF 1.1 and 2.0) and writes its crystal as a lattice file: the conventional cell by its Bravais type, one atom at each lattice point, the space group as a claim, and the path of the label book. Each data block with a cell becomes a document.',
    'What cannot be carried over is told on standard error and in comments of the file. A mixed or partly occupied site is kept as the species that is there most; of disordered groups the one that is occupied most is kept.',
    'Exit status: 0 where the lattice file is the crystal of the CIF; 1 where it was written but is not, or may not be (partial occupancy, disorder, atoms without places, a symmetry that contradicts itself …); 2 where nothing was written.',
  ],
  options: [
    { name: 'block', value: 'NAME', help: 'Only the data block of this name (what follows data_).' },
    OUTPUT,
    OVERWRITE,
  ],
  examples: ['braggline import PbTe.cif -o lead-telluride.lattice.yaml'],

  async run({ given, io, engine }: Call): Promise<number> {
    const desk = new Desk(io, given.value('output'), given.has('overwrite'))
    const [operand, ...others] = given.operands
    if (operand === undefined)
      throw new Refusal(`no CIF is named: give a file, or ${STANDARD_INPUT} for standard input`)
    if (others.length > 0) throw new Refusal(`one file is taken; these are ${given.operands.length}`)
    const { name, text } = await readText(operand, io)
    engine()
    const source = name === STANDARD_INPUT ? 'standard input' : basename(name)
    const { text: lattices, blocks, faults } = importCif(text, { source, block: given.value('block') })
    const failures = faults.map(({ message, line, column }) => `${name}:${line}:${column}: error: ${message}`)
    const remarks = blocks.flatMap(({ name: block, remarks }) =>
      remarks.map(({ level, message, place }) => {
        const where = place ? `${name}:${place.line}:${place.column}` : name
        const of = blocks.length > 1 ? `data block ${block}: ` : ''
        return `${where}: ${level === 'loss' ? 'warning' : 'note'}: ${of}${message}`
      }),
    )
    for (const line of [...failures, ...remarks]) desk.note(`${harmless(line)}\n`)
    if (lattices === undefined) return NOT_DONE
    desk.result(lattices)
    await desk.close()
    const isSame =
      faults.length === 0 && blocks.every(({ remarks }) => remarks.every(({ level }) => level === 'note'))
    return isSame ? CLEAN : FOUND
  },
}
