export { samplingCoarse } from './sampling-coarse.ts'
export { samplingUneven } from './sampling-uneven.ts'
