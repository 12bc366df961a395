import { defineConfig } from 'vitest/config';
import { patience } from '../host/patience.ts';
import { choice } from '../host/skip.ts';

// The page alone, in a browser, played with recordings: what a real host would be too slow and too coarse to show.
export default defineConfig({
  test: {
    root: import.meta.dirname,
    include: ['**/*.page.ts'],
    pool: 'forks',
    ...choice,
    ...patience,
    fileParallelism: false,
  },
});
