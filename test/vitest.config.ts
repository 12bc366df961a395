import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    root: import.meta.dirname,
    include: ['**/*.test.ts'],
    exclude: ['node_modules/**'],
    pool: 'forks',
    testTimeout: 60_000,
  },
});
