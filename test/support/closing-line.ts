import type { Reporter, TestModule } from 'vitest/node';

/** Prints `N passed, N failed, N skipped` as the last word of a test run, for people and for CI. */
export default class ClosingLine implements Reporter {
  onTestRunEnd(modules: readonly TestModule[]): void {
    const counts = { passed: 0, failed: 0, skipped: 0 };
    for (const module of modules) {
      for (const test of module.children.allTests()) {
        const { state } = test.result();
        if (state !== 'pending') counts[state]++;
      }
      // A file that cannot be loaded and a suite whose set-up fails have no failed test to count, and must not pass for it.
      for (const suite of [module, ...module.children.allSuites()]) {
        if (suite.errors().length > 0) counts.failed++;
      }
    }
    const line = `${counts.passed} passed, ${counts.failed} failed, ${counts.skipped} skipped`;
    process.on('exit', () => process.stdout.write(`${line}\n`));
  }
}
