export { supercellLeftHanded } from './supercell-left-handed.ts'
export { supercellSingular } from './supercell-singular.ts'
