import type { Reporter, TestModule } from 'vitest/node'

/** Ends the run with one plain line, `N passed, N failed`, that a script can read whatever the runner prints above it. */
export default class ClosingLineReporter implements Reporter {
  onTestRunEnd(modules: readonly TestModule[]): void {
    let passed = 0
    let failed = 0
    let skipped = 0
    for (const module of modules) {
      for (const test of module.children.allTests()) {
        const { state } = test.result()
        if (state === 'passed') passed += 1
        else if (state === 'failed') failed += 1
        else skipped += 1
      }
      // A file that cannot even be collected has no tests to count.
      failed += module.state() === 'failed' && module.errors().length > 0 ? 1 : 0
    }
    process.stdout.write(`\n${passed} passed, ${failed} failed${skipped > 0 ? `, ${skipped} skipped` : ''}\n`)
  }
}
