import { decodedRule } from './decoded.ts'

export const elementUnknown = decodedRule({
  id: 'element-unknown',
  summary: 'The name of an atom is not the symbol of an element.',
  why: 'A misspelled symbol becomes a kind of its own and lowers the symmetry of the crystal.',
  wrong: 'lattice: {bravais: cF, a: 5.43}\natoms:\n  - Sl: [0, 0, 0]\n',
  right: 'lattice: {bravais: cF, a: 5.43}\natoms:\n  - Si: [0, 0, 0]\n',
})
