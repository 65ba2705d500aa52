export { supercellLeftHanded } from './supercell-left-handed.ts'
export { supercellMissesPoint } from './supercell-misses-point.ts'
export { supercellSingular } from './supercell-singular.ts'
export { supercellSkewed } from './supercell-skewed.ts'
