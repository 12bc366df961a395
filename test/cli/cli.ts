import { type ChildProcess, spawn } from 'node:child_process';
import { bundleOnce } from '../node/bundle.ts';

export interface Ran {
  readonly code: number | null;
  readonly signal: string | null;
  readonly stdout: string;
  readonly stderr: string;
}

export interface RunOptions {
  readonly folder: string;
  readonly env?: Readonly<Record<string, string>>;
  /** Words before `node`: a shell's limits, say. */
  readonly before?: readonly string[];
  readonly nodeOptions?: readonly string[];
  /** Another Node than the one that runs the tests. */
  readonly node?: string;
  /** Gets the process as soon as it runs. */
  readonly running?: (child: ChildProcess) => void;
}

/** Runs the bundled command line to its end. */
export async function sizeproof(words: readonly string[], options: RunOptions): Promise<Ran> {
  const [program, ...args] = [
    ...(options.before ?? []),
    options.node ?? process.execPath,
    ...(options.nodeOptions ?? []),
    `${await bundleOnce()}/cli.js`,
    ...words,
  ];
  return new Promise((resolve, reject) => {
    const env = { ...process.env, XDG_CACHE_HOME: `${options.folder}/../no-such-cache`, ...options.env };
    const child = spawn(program, args, { cwd: options.folder, env });
    let stdout = '';
    let stderr = '';
    child.stdout.on('data', (text) => {
      stdout += text;
    });
    child.stderr.on('data', (text) => {
      stderr += text;
    });
    child.on('error', reject);
    child.on('close', (code, signal) => resolve({ code, signal, stdout, stderr }));
    options.running?.(child);
  });
}
