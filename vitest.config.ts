import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    include: ['test/**/*.test.ts'],
    globalSetup: ['./test/support/setup.ts'],
    reporters: ['default', './test/support/closing-line.ts'],
    // Pipeline tests start runs of their own with worker threads; more files at once would only fight for the cores.
    maxWorkers: 2,
    testTimeout: 300_000,
    hookTimeout: 300_000,
  },
});
