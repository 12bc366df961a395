import { defineConfig } from 'vitest/config';
import { patience } from './patience.ts';
import { choice } from './skip.ts';

// Tests in a real host: one at a time, since each has a browser and a server to itself.
export default defineConfig({
  test: {
    root: import.meta.dirname,
    include: ['**/*.host.ts'],
    pool: 'forks',
    ...choice,
    ...patience,
    fileParallelism: false,
  },
});
