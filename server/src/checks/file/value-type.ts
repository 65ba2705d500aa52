import { decodedRule } from './decoded.ts'

export const valueType = decodedRule({
  id: 'value-type',
  summary: 'A value is not of the kind that its key takes.',
  why: 'The value cannot be used, so what depends on it is not checked.',
  wrong: 'lattice: {bravais: cF, a: 5.43}\npath: [Γ, X]\n',
  right: 'lattice: {bravais: cF, a: 5.43}\npath: [Γ – X]\n',
})
