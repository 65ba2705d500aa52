/** The only list of rules. The order is that of the documentation. */
import * as atoms from './atoms/index.ts'
import type { Check } from './check.ts'
import * as file from './file/index.ts'
import * as lattice from './lattice/index.ts'

export const CHECKS: readonly Check[] = [
  ...Object.values(file),
  ...Object.values(lattice),
  ...Object.values(atoms),
] as readonly Check[]
