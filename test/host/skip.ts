import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';

/** Whether the tests in a browser and in an editor are left out by wish. */
export const isLeftOut: boolean = process.env.SKIP_HOST === '1';

/** For the configurations of those tests: no name fits, so each is counted as skipped and none is made ready. */
export const choice: { readonly testNamePattern?: RegExp } = isLeftOut ? { testNamePattern: /(?!)/ } : {};

/** Names of the tests in a folder's files, which only the extension host can load. */
export function namesOfTests(folder: string): string[] {
  const main = readFileSync(join(import.meta.dirname, folder, 'main.ts'), 'utf8');
  const files = [...main.matchAll(/^import '\.\/([\w-]+\.ts)';$/gm)].map(([, file]) => file);
  const others = readdirSync(join(import.meta.dirname, folder)).filter((file) => !files.includes(file));
  const forgotten = others.filter((file) => testsIn(folder, file).length > 0);
  if (forgotten.length > 0) throw new Error(`Expected main.ts to import ${forgotten.join(', ')}`);
  return files.flatMap((file) => testsIn(folder, file));
}

function testsIn(folder: string, file: string): string[] {
  const text = readFileSync(join(import.meta.dirname, folder, file), 'utf8');
  return [...text.matchAll(/^test\('((?:[^'\\]|\\.)*)'/gm)].map(([, name]) => name.replace(/\\(.)/g, '$1'));
}
