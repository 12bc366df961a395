import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

/** What lies beside the bench when it is bundled. */
export function beside(name: string): string {
  return fileURLToPath(new URL(`./${name}`, import.meta.url));
}

/** Runs the command line in a process of its own, in `folder`, with a cache below it. Rejects where it fails. */
export function sizeproof(folder: string, args: readonly string[]): Promise<string> {
  const cache = join(folder, '.cache');
  return node([beside('cli.js'), ...args, '--quiet'], folder, { XDG_CACHE_HOME: cache, LOCALAPPDATA: cache });
}

/** Runs Node and answers what it printed. */
export function node(args: readonly string[], folder: string, variables: NodeJS.ProcessEnv = {}): Promise<string> {
  return new Promise((resolve, reject) => {
    const child = spawn(process.execPath, args, {
      cwd: folder,
      env: { ...process.env, ...variables },
      stdio: ['ignore', 'pipe', 'inherit'],
    });
    let printed = '';
    child.stdout.setEncoding('utf8').on('data', (text: string) => {
      printed += text;
    });
    child.on('error', reject);
    child.on('close', (code) => {
      if (code === 0) resolve(printed);
      else reject(new Error(`${args.join(' ')} ended with exit code ${code}.`));
    });
  });
}

/** Does something in a folder of its own, which is gone afterwards. */
export async function inFolder<T>(work: (folder: string) => Promise<T>): Promise<T> {
  const folder = mkdtempSync(join(tmpdir(), 'sizeproof-bench-'));
  try {
    return await work(folder);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
