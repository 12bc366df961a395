import { copyFileSync, cpSync, existsSync, rmSync } from 'node:fs';
import { build } from 'esbuild';
import { afterAll } from 'vitest';
import { kernelBytes } from '../fixtures/simd.ts';

const top = new URL('../../', import.meta.url).pathname;

const entries = { cli: 'extension/cli/main.ts', 'pool.worker': 'extension/node/pool.worker.ts' };

/** Bundles the command line and its worker into a folder of the tests, once a process, and answers the folder. */
export async function bundleOnce(): Promise<string> {
  bundled ??= bundle();
  return bundled;
}

/** A folder for what the tests of this process bundle, inside the tree so that it is taken for ES modules; gone at the end. */
export function folderOfTests(): string {
  return `${top}dist/test/${process.pid}`;
}

afterAll(() => rmSync(folderOfTests(), { recursive: true, force: true }));

let bundled: Promise<string> | null = null;

async function bundle(): Promise<string> {
  const outdir = folderOfTests();
  await build({
    entryPoints: Object.fromEntries(Object.entries(entries).map(([name, path]) => [name, `${top}${path}`])),
    outdir,
    bundle: true,
    platform: 'node',
    mainFields: ['module', 'main'],
    target: 'node20',
    format: 'esm',
    logLevel: 'error',
    banner: {
      js: "import { createRequire as createRequireHere } from 'node:module';\nconst require = createRequireHere(import.meta.url);",
    },
  });
  kernelBytes();
  copyFileSync(`${top}dist/engine.wasm`, `${outdir}/engine.wasm`);
  cpSync(`${top}dist/page`, `${outdir}/page`, { recursive: true });
  if (!existsSync(`${outdir}/cli.js`)) throw new Error('The command line was not bundled.');
  return outdir;
}
