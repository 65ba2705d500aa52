import { defineConfig } from 'vitest/config'

export default defineConfig({
  test: {
    include: ['test/{unit,reference,protocol,scenario,fuzz}/**/*.test.ts'],
    testTimeout: 120_000,
    hookTimeout: 120_000,
  },
})
