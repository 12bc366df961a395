import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';

/** Whether the host tests are left out by wish. A build server may not wish so. */
export const isLeftOut: boolean = process.env.SKIP_HOST === '1';

if (isLeftOut && process.env.CI) throw new Error('SKIP_HOST is refused where CI is set: the host tests must run.');

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
