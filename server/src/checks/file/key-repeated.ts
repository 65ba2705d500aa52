import { decodedRule } from './decoded.ts'

export const keyRepeated = decodedRule({
  id: 'key-repeated',
  summary: 'A key stands twice in one mapping.',
  why: 'Only one of the two can count, and readers differ in which.',
  wrong: 'lattice: {bravais: cF, a: 5.43}\npath: Γ – X\npath: Γ – L\n',
  right: 'lattice: {bravais: cF, a: 5.43}\npath: Γ – X | Γ – L\n',
})
