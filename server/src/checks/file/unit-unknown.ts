import { decodedRule } from './decoded.ts'

export const unitUnknown = decodedRule({
  id: 'unit-unknown',
  summary: 'The unit of length is not one of `angstrom`, `nm`, `bohr`.',
  why: 'A cell read in another unit is another crystal.',
  wrong: 'unit: angstroem\nlattice: {bravais: cF, a: 5.43}\n',
  right: 'unit: angstrom\nlattice: {bravais: cF, a: 5.43}\n',
})
