import { decodedRule } from './decoded.ts'

export const yamlSyntax = decodedRule({
  id: 'yaml-syntax',
  summary: 'The text is not valid YAML, or is built so that reading it would never end.',
  why: 'A reader that guesses what was meant may guess another crystal.',
  wrong: 'lattice: {bravais: cF, a: 5.43\npath: Γ – X\n',
  right: 'lattice: {bravais: cF, a: 5.43}\npath: Γ – X\n',
})
