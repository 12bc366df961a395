import { defineConfig } from 'vitest/config';
import { choice } from '../host/skip.ts';

// The page alone, in a browser, played with recordings: what a real host would be too slow and too coarse to show.
export default defineConfig({
  test: {
    root: import.meta.dirname,
    include: ['**/*.page.ts'],
    pool: 'forks',
    ...choice,
    fileParallelism: false,
    testTimeout: 120_000,
    hookTimeout: 120_000,
  },
});
