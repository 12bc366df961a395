import { cpSync, mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { build } from 'esbuild';
import { top } from '../house/tree.ts';
import { run } from './process.ts';

/** Packs the extension as it is shipped, from what was built, and answers the file. */
export async function packVsix(folder: string): Promise<string> {
  mkdirSync(folder, { recursive: true });
  const file = join(folder, 'sizeproof.vsix');
  await pack(top, file);
  return file;
}

/** Packs an extension that gives the editor a file system in memory, which holds what a folder holds, and answers the file. */
export async function packMemlab(seed: string, folder: string): Promise<string> {
  cpSync(seed, join(folder, 'memlab', 'seed'), { recursive: true });
  return packHelper('memlab', folder);
}

/** Packs an extension that answers what the extension host takes, and answers the file. */
export function packProbe(folder: string): Promise<string> {
  return packHelper('probe', folder);
}

async function packHelper(name: string, folder: string): Promise<string> {
  const made = join(folder, name);
  mkdirSync(made, { recursive: true });
  cpSync(join(import.meta.dirname, name, 'package.json'), join(made, 'package.json'));
  writeFileSync(join(made, 'LICENSE'), 'MIT\n');
  writeFileSync(join(made, 'README.md'), 'For tests.\n');
  await build({
    entryPoints: [join(import.meta.dirname, name, 'main.ts')],
    outfile: join(made, 'main.js'),
    bundle: true,
    platform: 'node',
    format: 'cjs',
    external: ['vscode'],
  });
  const file = join(folder, `${name}.vsix`);
  await pack(made, file);
  return file;
}

async function pack(folder: string, file: string): Promise<void> {
  const vsce = join(top, 'test', 'node_modules', '@vscode', 'vsce', 'vsce');
  const options = [
    'package',
    '--no-dependencies',
    '--allow-missing-repository',
    '--no-rewrite-relative-links',
    '--out',
    file,
  ];
  await run(process.execPath, [vsce, ...options], folder);
}
