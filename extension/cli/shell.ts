import { oneLine, problemLine } from '../../core/line.ts';
import { exitCode, type Problem } from '../../core/problem.ts';
import { nameFrom, problemJson } from './print.ts';
import type { Terminal } from './progress.ts';

/** What a command runs in. */
export interface Shell {
  /** The working directory, "/"-separated. */
  readonly folder: string;
  readonly env: Readonly<Record<string, string | undefined>>;
  readonly stdout: { write(text: string): unknown };
  readonly stderr: Terminal;
  readonly isCancelled: () => boolean;
  /** 1 in its only Int32 when work should stop. */
  readonly cancel: SharedArrayBuffer;
  /** Resolves when work should stop. */
  readonly stopped: Promise<void>;
}

/** What a command has to say. */
export interface Result {
  /** Entries of the JSON document. */
  readonly textures: readonly object[];
  /** Further members of the document. */
  readonly more?: Readonly<Record<string, unknown>>;
  readonly problems: readonly Problem[];
  readonly summary: Summary;
  /** Lines for people. */
  readonly lines: readonly string[];
  readonly cancelled: boolean;
}

export interface Summary {
  readonly built: number;
  readonly unchanged: number;
  readonly failed: number;
}

export const nothingDone: Summary = { built: 0, unchanged: 0, failed: 0 };

/** How a result is printed: `people` get lines, `problems` problems alone, `json` one document beside the problems. */
export type Voice = 'people' | 'problems' | 'json';

/** Prints a result and answers the exit code that it asks for. */
export function conclude(shell: Shell, command: string | null, result: Result, voice: Voice): number {
  const nameOf = nameFrom(shell.folder);
  for (const problem of result.problems) shell.stderr.write(`${problemLine(problem, nameOf)}\n`);
  switch (voice) {
    case 'json': {
      const problems = result.problems.map((problem) => problemJson(problem, nameOf));
      const { textures, more, summary } = result;
      shell.stdout.write(`${JSON.stringify({ format: 1, command, textures, ...more, problems, summary }, null, 2)}\n`);
      break;
    }
    case 'people':
      for (const line of result.lines) shell.stdout.write(`${oneLine(line)}\n`);
      break;
    case 'problems':
      break;
  }
  return result.cancelled ? 130 : exitCode(result.problems);
}

/** A result that is only problems. */
export function onlyProblems(problems: readonly Problem[]): Result {
  return { textures: [], problems, summary: nothingDone, lines: [], cancelled: false };
}
