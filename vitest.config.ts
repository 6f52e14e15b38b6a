import { defineConfig } from 'vitest/config'

/** One project a part: what a test may use (a database, a document, a browser) follows from where it stands. */
const common = { restoreMocks: true, unstubEnvs: true, unstubGlobals: true }

export default defineConfig({
  test: {
    maxWorkers: 2,
    reporters: ['default', './tests/support/closing-line-reporter.ts'],
    globalSetup: ['tests/support/global-setup.ts'],
    projects: [
      {
        test: {
          ...common,
          name: 'shared',
          environment: 'node',
          include: ['tests/shared/**/*.test.ts', 'tests/*.test.ts'],
          testTimeout: 60_000,
        },
      },
      {
        test: {
          ...common,
          name: 'setup',
          environment: 'node',
          include: ['tests/setup/**/*.test.ts'],
          testTimeout: 600_000,
          hookTimeout: 120_000,
        },
      },
      {
        test: {
          ...common,
          name: 'cli',
          environment: 'node',
          include: ['tests/cli/**/*.test.ts'],
          testTimeout: 120_000,
        },
      },
      {
        test: {
          ...common,
          name: 'server',
          environment: 'node',
          include: ['tests/server/**/*.test.ts'],
          testTimeout: 120_000,
          hookTimeout: 120_000,
        },
      },
      {
        test: {
          ...common,
          name: 'web',
          environment: 'jsdom',
          include: ['tests/src/**/*.test.{ts,tsx}'],
          setupFiles: ['tests/support/web-setup.ts'],
          testTimeout: 60_000,
        },
      },
      {
        test: {
          ...common,
          name: 'e2e',
          environment: 'node',
          include: ['tests/e2e/**/*.test.ts'],
          testTimeout: 300_000,
          hookTimeout: 120_000,
          fileParallelism: false,
        },
      },
      {
        test: {
          ...common,
          name: 'faults',
          environment: 'node',
          include: ['tests/faults/**/*.test.ts'],
          testTimeout: 600_000,
          hookTimeout: 120_000,
        },
      },
    ],
  },
})
