import { type Code, exitOf, type Values, words } from './words.ts';

/** Where a problem is. `line` and `column` count from 1, `column` in UTF-16 units. */
export interface Place {
  readonly path?: string;
  readonly line?: number;
  readonly column?: number;
}

/** Something that stops work on one thing, or should be known: a stable code, the numbers, the place. */
export interface Problem extends Place {
  readonly code: Code;
  readonly severity: 'error' | 'warning';
  readonly values: Readonly<Record<string, string | number>>;
}

/** Thrown by core for bad data and bad settings; the doors catch it and print its problem.
 *  A caller's mistake is a RangeError or a TypeError instead. */
export class Refusal extends Error {
  readonly problem: Problem;

  constructor(problem: Problem) {
    super(say(problem));
    this.name = 'Refusal';
    this.problem = problem;
  }
}

/** Throws the problem `code`; its template in words.ts says which values it needs. */
export function refuse<C extends Code>(code: C, values: Values<C>, place: Place = {}): never {
  throw new Refusal({ code, severity: 'error', values, ...place });
}

/** An error that is handed on rather than thrown: something measured is over its limit. */
export function finding<C extends Code>(code: C, values: Values<C>, place: Place = {}): Problem {
  return { code, severity: 'error', values, ...place };
}

export function warning<C extends Code>(code: C, values: Values<C>, place: Place = {}): Problem {
  return { code, severity: 'warning', values, ...place };
}

/** The problem's words in English, numbers filled in, without the place. */
export function say(problem: Problem): string {
  return words[problem.code].replace(/\{(\w+)\}/g, (_, name: string) => String(problem.values[name] ?? `{${name}}`));
}

/** The same refusal, with the path of the file it is about where it lacks one. */
export function placed(problem: Problem, path: string): Problem {
  return problem.path === undefined ? { ...problem, path } : problem;
}

/** The process exit code that a list of problems asks for: the highest that applies, 0 for warnings alone. */
export function exitCode(problems: readonly Problem[]): number {
  return problems.reduce((worst, each) => (each.severity === 'error' ? Math.max(worst, exitOf(each.code)) : worst), 0);
}
