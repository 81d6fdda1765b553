import { defineConfig } from 'vitest/config';

/** `npm run test:containers`: needs a Docker engine, and builds images. */
export default defineConfig({
  test: {
    include: ['test/containers/**/*.test.ts'],
    reporters: ['verbose', './test/support/closing-line.ts'],
    fileParallelism: false,
    testTimeout: 600_000,
    hookTimeout: 1_800_000,
  },
});
