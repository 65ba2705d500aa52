import { decodedRule } from './decoded.ts'

export const numberMalformed = decodedRule({
  id: 'number-malformed',
  summary: 'A number or an expression cannot be read.',
  why: 'The value cannot be used, so what depends on it is not checked.',
  wrong: 'lattice: {bravais: cF, a: 5.43 A}\n',
  right: 'lattice: {bravais: cF, a: 5.43}\n',
})
