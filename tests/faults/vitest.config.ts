import { defineConfig } from 'vitest/config'

/** The long form of the fault tests (quality.md, R1, R2 and R6): `npm run test:faults`. Sizes can be set as in the short form. */
export default defineConfig({
  test: {
    include: ['tests/faults/**/*.test.ts'],
    environment: 'node',
    fileParallelism: false,
    maxWorkers: 1,
    testTimeout: 6 * 60 * 60 * 1000,
    hookTimeout: 120_000,
    globalSetup: ['tests/support/global-setup.ts'],
    env: {
      OGEE_KILLS: process.env.OGEE_KILLS ?? '1000',
      OGEE_DELIVERIES: process.env.OGEE_DELIVERIES ?? '1000000',
      OGEE_TAMPERINGS: process.env.OGEE_TAMPERINGS ?? '10000',
    },
  },
})
