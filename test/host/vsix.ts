import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import { top } from '../house/tree.ts';
import { run } from './process.ts';

/** Packs the extension as it is shipped, from what was built, and answers the file. */
export async function packVsix(folder: string): Promise<string> {
  mkdirSync(folder, { recursive: true });
  const file = join(folder, 'sizeproof.vsix');
  const vsce = join(top, 'test', 'node_modules', '@vscode', 'vsce', 'vsce');
  const options = [
    'package',
    '--no-dependencies',
    '--allow-missing-repository',
    '--no-rewrite-relative-links',
    '--out',
    file,
  ];
  await run(process.execPath, [vsce, ...options], top);
  return file;
}
