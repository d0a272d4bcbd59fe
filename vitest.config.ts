import { defineConfig } from 'vitest/config';

// `npm run golden` is this run in the mode "golden": the golden files are then written instead of compared.
export default defineConfig(({ mode }) => ({
  test: {
    include: ['test/**/*.test.ts'],
    exclude: ['test/bench/**'],
    env: mode === 'golden' ? { GOLDEN: 'update' } : {},
    testTimeout: 240_000,
    hookTimeout: 60_000,
    pool: 'forks',
    maxWorkers: 2,
  },
}));
