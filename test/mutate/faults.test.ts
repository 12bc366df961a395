import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { faults } from './faults.mjs';

const root = join(import.meta.dirname, '..', '..');

// Running all faults takes minutes and has a command of its own; that each can still be made is seen here.
it.each(faults)('can still break: $law', ({ file, find, replace, tests, name }) => {
  expect(readFileSync(join(root, file), 'utf8').split(find).length - 1, `${find} in ${file}`).toBe(1);
  expect(replace).not.toBe(find);
  expect(existsSync(join(root, tests)), tests).toBe(true);
  if (name !== undefined) expect(readFileSync(join(root, tests), 'utf8')).toContain(name);
});

it('has a name of its own for each law', () => {
  expect(new Set(faults.map(({ law }) => law)).size).toBe(faults.length);
});
