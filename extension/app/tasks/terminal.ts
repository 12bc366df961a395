import * as vscode from 'vscode';
import { exitCode, type Problem } from '../../../core/problem.ts';
import { pathBelow } from '../../../core/treatment/paths/path.ts';
import { type BuildDesk, runBuild } from '../build/desk.ts';
import { buildEnding, checkEnding, type Ending } from '../build/report.ts';
import { pathOf } from '../files/place.ts';
import { sayProblemLine } from '../words.ts';

export type TaskCommand = 'build' | 'check';

/** Exit code of work that was called off, as the command line's. */
const INTERRUPTED = 130;

/** A terminal in which a build or check runs and prints the lines that the command line prints. */
export function openTerminal(
  command: TaskCommand,
  folder: vscode.WorkspaceFolder,
  resources: readonly vscode.Uri[],
  desk: BuildDesk,
): vscode.Pseudoterminal {
  const written = new vscode.EventEmitter<string>();
  const closed = new vscode.EventEmitter<number>();
  const source = new vscode.CancellationTokenSource();
  const nameOf = (path: string) => pathBelow(pathOf(folder.uri), path) || path;
  const print = (line: string) => written.fire(`${line}\r\n`);

  return {
    onDidWrite: written.event,
    onDidClose: closed.event,
    open: () => void run(),
    close: () => source.cancel(),
  };

  async function run(): Promise<void> {
    try {
      closed.fire(await work());
    } catch (error) {
      print(String(error));
      closed.fire(1);
    }
  }

  async function work(): Promise<number> {
    if (command === 'build') {
      const report = await desk.runFor('writes', resources, (door, order) =>
        runBuild(door, 'build', order, source.token, { begin: () => undefined, done: () => undefined }),
      );
      return 'problem' in report ? refused(report.problem) : conclude(buildEnding(report, nameOf), report);
    }
    const report = await desk.runFor('reads', resources, (door, order) => door.check(order, source.token));
    return 'problem' in report ? refused(report.problem) : conclude(checkEnding(report, nameOf), report);
  }

  function refused(problem: Problem): number {
    print(sayProblemLine(problem, nameOf));
    return exitCode([problem]);
  }

  function conclude(
    { lines, summary }: Ending,
    { problems, cancelled }: { readonly problems: readonly Problem[]; readonly cancelled: boolean },
  ): number {
    for (const { text } of lines) print(text);
    print(summary);
    return cancelled ? INTERRUPTED : exitCode(problems);
  }
}
