/** The only list of rules. The order is that of the documentation. */
import * as atoms from './atoms/index.ts'
import type { Check } from './check.ts'
import * as file from './file/index.ts'
import * as lattice from './lattice/index.ts'
import * as mesh from './mesh/index.ts'
import * as path from './path/index.ts'
import * as points from './points/index.ts'
import * as sampling from './sampling/index.ts'
import * as supercell from './supercell/index.ts'

export const CHECKS: readonly Check[] = [
  ...Object.values(file),
  ...Object.values(lattice),
  ...Object.values(atoms),
  ...Object.values(points),
  ...Object.values(path),
  ...Object.values(sampling),
  ...Object.values(mesh),
  ...Object.values(supercell),
] as readonly Check[]
