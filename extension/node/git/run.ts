import { type ChildProcessWithoutNullStreams, spawn } from 'node:child_process';
import { existsSync } from 'node:fs';
import { Refusal, refuse } from '../../../core/problem.ts';

/** What a Git command wrote, and how it ended. */
export interface GitResult {
  readonly code: number;
  readonly stdout: Buffer;
  /** Joined to one line, at most 2000 characters. */
  readonly stderr: string;
}

/** Runs Git in a folder to its end, never through a shell. Any exit code is an answer; Refusal `git-missing` where there is no Git. */
export async function tryGit(folder: string, args: readonly string[], input = ''): Promise<GitResult> {
  const child = startGit(folder, args);
  const pieces: Buffer[] = [];
  let complaint = '';
  child.stdout.on('data', (piece: Buffer) => pieces.push(piece));
  child.stderr.on('data', (piece: Buffer) => {
    if (complaint.length < 2000) complaint += piece.toString();
  });
  // Git may end before it has read all.
  child.stdin.on('error', () => undefined);
  child.stdin.end(input);
  const code = await new Promise<number>((resolve, reject) => {
    child.on('error', (error: NodeJS.ErrnoException) => reject(spawnRefusal(error, folder)));
    child.on('close', (exit, signal) => resolve(exit ?? (signal === null ? 1 : 128)));
  });
  return { code, stdout: Buffer.concat(pieces), stderr: complaint.slice(0, 2000).replaceAll(/\s+/g, ' ').trim() };
}

/** The same where anything but exit code 0 is a failure: Refusal `git-failed`, never an empty answer. */
export async function runGit(folder: string, args: readonly string[], input = ''): Promise<Buffer> {
  const { code, stdout, stderr } = await tryGit(folder, args, input);
  if (code === 0) return stdout;
  return refuse('git-failed', { reason: stderr || `\`git ${args[0]}\` ended with exit code ${code}` });
}

/** Starts Git with everything off that a repository's own settings could run or that could reach the network. */
export function startGit(folder: string, args: readonly string[]): ChildProcessWithoutNullStreams {
  return spawn('git', [...SAFE_OPTIONS, ...args], { cwd: folder, env: gitEnvironment(process.env), windowsHide: true });
}

export function spawnRefusal(error: NodeJS.ErrnoException, folder: string): Error {
  // A folder that is not there is told in the same way as a program.
  if (error.code !== 'ENOENT' || !existsSync(folder)) return error;
  return new Refusal({ code: 'git-missing', severity: 'error', values: {} });
}

/** A monitor of files, hooks and a pager are programs that a repository can name. The null device is no folder, so it holds no hook. */
const SAFE_OPTIONS = [
  '--no-pager',
  ...['-c', 'core.fsmonitor=false'],
  ...['-c', 'core.hooksPath=/dev/null'],
  ...['-c', 'core.quotePath=false'],
  ...['-c', 'submodule.recurse=false'],
  ...['-c', 'protocol.allow=never'],
];

/** The environment without what redirects Git's output, traces it to files, or names programs; no lock is taken, nothing is asked
 *  for, and nothing that is missing is fetched. */
export function gitEnvironment(env: NodeJS.ProcessEnv): NodeJS.ProcessEnv {
  const kept = Object.entries(env).filter(([name]) => !/^GIT_/i.test(name) || KEPT.test(name));
  return {
    ...Object.fromEntries(kept),
    LC_ALL: 'C',
    LANGUAGE: 'C',
    GIT_OPTIONAL_LOCKS: '0',
    GIT_TERMINAL_PROMPT: '0',
    GIT_NO_LAZY_FETCH: '1',
    GIT_PAGER: 'cat',
  };
}

/** Where the user's own settings lie, and who may be looked for above: they are the user's, not the repository's. */
const KEPT =
  /^GIT_(CONFIG_(GLOBAL|SYSTEM|NOSYSTEM|COUNT|KEY_\d+|VALUE_\d+)|CEILING_DIRECTORIES|DISCOVERY_ACROSS_FILESYSTEM|EXEC_PATH|INDEX_FILE)$/;
