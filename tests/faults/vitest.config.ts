import { defineConfig } from 'vitest/config'

/** The long form of the fault tests (quality.md, R1, R2 and R6): `npm run test:faults`. Sizes can be set as in the short form. */
export default defineConfig({
  test: {
    // R7 and a part of R8 stand with what they test; from here they are run at their long size, and tell seconds.
    include: ['tests/faults/**/*.test.ts', 'tests/server/*-race.test.ts', 'tests/server/outage.test.ts'],
    environment: 'node',
    fileParallelism: false,
    maxWorkers: 1,
    testTimeout: 6 * 60 * 60 * 1000,
    hookTimeout: 120_000,
    globalSetup: ['tests/support/global-setup.ts'],
    env: {
      OGEE_TIMES: '1',
      OGEE_KILLS: process.env.OGEE_KILLS ?? '1000',
      OGEE_ACKNOWLEDGED_A_KILL: process.env.OGEE_ACKNOWLEDGED_A_KILL ?? '100',
      OGEE_RACES: process.env.OGEE_RACES ?? '10000',
      OGEE_TWO_SERVERS_SECONDS: process.env.OGEE_TWO_SERVERS_SECONDS ?? '1800',
      OGEE_READY_ROUNDS: process.env.OGEE_READY_ROUNDS ?? '20',
      OGEE_SPOOL_UNITS: process.env.OGEE_SPOOL_UNITS ?? '100000',
      OGEE_SPOOL_KILLS: process.env.OGEE_SPOOL_KILLS ?? '500',
      OGEE_ROWS: process.env.OGEE_ROWS ?? '100000',
      OGEE_DELIVERIES: process.env.OGEE_DELIVERIES ?? '1000000',
      OGEE_TAMPERINGS: process.env.OGEE_TAMPERINGS ?? '10000',
    },
  },
})
