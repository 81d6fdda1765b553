import { configDefaults, defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    include: ['test/**/*.test.ts'],
    // These need a Docker engine: `npm run test:containers`.
    exclude: [...configDefaults.exclude, 'test/containers/**'],
    globalSetup: ['./test/support/setup.ts'],
    reporters: ['default', './test/support/closing-line.ts'],
    // Pipeline tests start runs of their own with worker threads; more files at once would only fight for the cores.
    maxWorkers: 2,
    testTimeout: 300_000,
    hookTimeout: 300_000,
  },
});
