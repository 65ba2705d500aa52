export * from '../meaning/sampling.ts'
