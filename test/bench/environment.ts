import { execFileSync } from 'node:child_process';
import { availableParallelism, cpus, loadavg, release, type } from 'node:os';

/** Where a benchmark ran. Nothing in it names the machine. */
export interface Environment {
  readonly node: string;
  readonly v8: string;
  readonly processor: string;
  readonly cores: number;
  readonly system: string;
  readonly date: string;
  readonly commit: string;
  /** Processes that were running or waiting, over a minute, before and after. */
  readonly load: string;
  /** What a reader should know first. */
  readonly note: string | null;
}

export function readEnvironment(before: number, note: string | null): Environment {
  return {
    node: process.version,
    v8: process.versions.v8,
    processor: cpus()[0]?.model.trim() ?? 'unknown',
    cores: availableParallelism(),
    system: `${type()} ${release().split('-')[0]}`,
    date: new Date().toISOString().slice(0, 10),
    commit: commit(),
    load: `${before.toFixed(2)}, ${loadavg()[0].toFixed(2)}`,
    note,
  };
}

function commit(): string {
  const git = (...args: string[]): string => execFileSync('git', args, { encoding: 'utf8' }).trim();
  try {
    const changed = git(
      'status',
      '--porcelain',
      '--untracked-files=no',
      '--',
      'core',
      'extension',
      'webview',
      'test/bench',
      ':!test/bench/RESULTS.md',
    );
    return git('rev-parse', '--short=10', 'HEAD') + (changed === '' ? '' : ', with changes');
  } catch {
    return 'none: not a repository';
  }
}
