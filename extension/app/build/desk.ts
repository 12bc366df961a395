import * as vscode from 'vscode';
import type { Problem } from '../../../core/problem.ts';
import type { BuildReport, CheckReport, DiskDoor, Order, Platform } from '../platform.ts';
import { readConfiguration } from '../settings/configuration.ts';
import { sayProblem } from '../words.ts';
import { doorFor } from './hindrance.ts';
import { FoundProblems } from './problems.ts';
import { buildEnding, checkEnding, type Ending } from './report.ts';
import { settleUnsavedSettings } from './unsaved.ts';

export type BuildKind = 'build' | 'prune' | 'rebuild';

/** `shown` has progress and a message at its end. `asked` comes from a page that shows both itself; `quiet` from nobody. These two
 *  speak of errors alone. */
export type Manner = 'shown' | 'asked' | 'quiet';

/** Where builds and checks are ordered, one after another: two builds at once would race for the same outputs. */
export class BuildDesk {
  readonly #platform: Platform;
  readonly #log: vscode.LogOutputChannel;
  readonly #found = new FoundProblems();
  readonly #built = new vscode.EventEmitter<void>();
  #last: Promise<unknown> = Promise.resolve();

  /** Fires when a build has ended. */
  readonly onDidBuild = this.#built.event;

  constructor(platform: Platform, log: vscode.LogOutputChannel) {
    this.#platform = platform;
    this.#log = log;
  }

  /** Builds files or folders. Null where nothing could begin. */
  async build(kind: BuildKind, resources: readonly vscode.Uri[], manner: Manner): Promise<BuildReport | null> {
    const opened = this.#open('writes', resources);
    if (opened === null || (manner !== 'quiet' && !(await settleUnsavedSettings()))) return null;
    const { door, order } = opened;
    const title = vscode.l10n.t('Building textures');
    const report = await this.#queue(() =>
      withProgress(title, manner, (cancel, progress) => runBuild(door, kind, order, cancel, progress)),
    );
    const problems = manner === 'quiet' ? report.problems.filter(isNews) : report.problems;
    this.#found.show(resources, problems);
    this.#built.fire();
    this.#end(buildEnding({ ...report, problems }, nameOf), manner);
    return report;
  }

  /** Compares outputs with what is asked for. Null where nothing could begin. */
  async check(resources: readonly vscode.Uri[]): Promise<CheckReport | null> {
    const opened = this.#open('reads', resources);
    if (opened === null) return null;
    const title = vscode.l10n.t('Checking textures');
    const report = await this.#queue(() =>
      withProgress(title, 'shown', (cancel) => opened.door.check(opened.order, cancel)),
    );
    this.#found.show(resources, report.problems);
    this.#end(checkEnding(report, nameOf), 'shown');
    return report;
  }

  /** Builds or checks for somebody who prints what comes of it. */
  async runFor<T>(
    work: 'reads' | 'writes',
    resources: readonly vscode.Uri[],
    run: (door: DiskDoor, order: Order) => Promise<T>,
  ): Promise<T | { readonly problem: Problem }> {
    const opened = doorFor(work, resources[0], this.#platform);
    if ('problem' in opened) return opened;
    const result = await this.#queue(() => run(opened.door, orderOf(resources)));
    if (work === 'writes') this.#built.fire();
    return result;
  }

  dispose(): void {
    this.#found.dispose();
    this.#built.dispose();
  }

  #open(work: 'reads' | 'writes', resources: readonly vscode.Uri[]) {
    const opened = doorFor(work, resources[0], this.#platform);
    if ('door' in opened) return { door: opened.door, order: orderOf(resources) };
    void vscode.window.showErrorMessage(sayProblem(opened.problem));
    return null;
  }

  #queue<T>(work: () => Promise<T>): Promise<T> {
    const mine = this.#last.then(work);
    this.#last = mine.catch(() => undefined);
    return mine;
  }

  #end({ summary, lines, worst }: Ending, manner: Manner): void {
    for (const { severity, text } of lines) {
      if (severity === 'error') this.#log.error(text);
      else if (severity === 'warning') this.#log.warn(text);
      else this.#log.info(text);
    }
    this.#log.info(summary);
    if (manner !== 'shown' && worst !== 'error') return;
    const showLog = vscode.l10n.t('Show Log');
    const say = worst === 'error' ? vscode.window.showWarningMessage : vscode.window.showInformationMessage;
    void say(summary, showLog).then((chosen) => {
      if (chosen === showLog) this.#log.show();
    });
  }
}

/** Runs one kind of build. */
export function runBuild(
  door: DiskDoor,
  kind: BuildKind,
  order: Order,
  cancel: vscode.CancellationToken,
  progress: { begin(count: number): void; done(texture: { readonly source: string }): void },
): Promise<BuildReport> {
  switch (kind) {
    case 'build':
      return door.build({ ...order, orphans: 'keep' }, cancel, progress);
    case 'prune':
      return door.build({ ...order, orphans: 'prune' }, cancel, progress);
    case 'rebuild':
      return door.rebuild({ ...order, algorithm: 'recorded' }, cancel, progress);
  }
}

/** A path as messages name it. */
export function nameOf(path: string): string {
  return vscode.workspace.asRelativePath(path);
}

function orderOf(resources: readonly vscode.Uri[]): Order {
  const { jobs, memoryBytes } = readConfiguration(resources[0]);
  return { paths: resources.map((each) => each.fsPath.replaceAll('\\', '/')), jobs, memoryBytes };
}

/** A file that was saved need not be a texture. */
function isNews({ code }: Problem): boolean {
  return code !== 'nothing-selected';
}

function withProgress<T>(
  title: string,
  manner: Manner,
  work: (
    cancel: vscode.CancellationToken,
    progress: { begin(count: number): void; done(texture: { readonly source: string }): void },
  ) => Promise<T>,
): Promise<T> {
  const location = manner === 'shown' ? vscode.ProgressLocation.Notification : vscode.ProgressLocation.Window;
  const shown = vscode.window.withProgress({ location, title, cancellable: manner === 'shown' }, (bar, cancel) => {
    let count = 0;
    let finished = 0;
    return work(cancel, {
      begin(total) {
        count = total;
      },
      done({ source }) {
        finished++;
        const message = vscode.l10n.t('{finished} of {count}: {name}', { finished, count, name: nameOf(source) });
        bar.report({ message, increment: 100 / count });
      },
    });
  });
  return Promise.resolve(shown);
}
