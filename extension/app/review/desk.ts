import * as vscode from 'vscode';
import { type Problem, Refusal } from '../../../core/problem.ts';
import type { GlancedItem, Platform, ReviewSession, ReviewSubject } from '../platform.ts';
import { readConfiguration } from '../settings/configuration.ts';
import type { LookedAt } from './looked.ts';
import { openRow, type ReviewRow, sortRows } from './row.ts';

/** Which textures of a review to show: those at these paths, from the top of the repository; null for all. */
export type Only = ReadonlySet<string> | null;

/** The review at hand: its rows, the most harmful first, as much of each as is known by now. One at a time. */
export class ReviewDesk implements vscode.Disposable {
  readonly #platform: Platform;
  readonly #looked: LookedAt;
  readonly #log: vscode.LogOutputChannel;
  readonly #changed = new vscode.EventEmitter<void>();
  #session: ReviewSession | null = null;
  #rows: readonly ReviewRow[] = [];
  #cancel: vscode.CancellationTokenSource | null = null;
  #timer: { dispose(): void } | null = null;
  #moved: { dispose(): void } | null = null;
  /** Paths and contents as they were read. */
  #contents = '';
  subject: ReviewSubject | null = null;
  only: Only = null;
  /** What is being done; null where nothing is. */
  stage: 'listing' | 'headers' | 'pixels' | null = null;
  /** Why nothing could be listed. */
  problem: Problem | null = null;
  /** Whether the repository moved since the rows were made. */
  outdated: 'yes' | 'no' = 'no';

  /** Fires when rows or the stage changed, some times a second at most. */
  readonly onDidChange = this.#changed.event;

  constructor(platform: Platform, looked: LookedAt, log: vscode.LogOutputChannel) {
    this.#platform = platform;
    this.#looked = looked;
    this.#log = log;
  }

  get session(): ReviewSession | null {
    return this.#session;
  }

  get rows(): readonly ReviewRow[] {
    return this.#rows;
  }

  get lookedAt(): number {
    return this.#rows.filter((row) => this.isLooked(row)).length;
  }

  isLooked(row: ReviewRow): boolean {
    return row.content !== null && this.#looked.has(row.content);
  }

  look(rows: readonly ReviewRow[], looked: 'yes' | 'no'): void {
    const known = rows.flatMap(({ content }) => content ?? []);
    this.#looked.mark(known, looked);
    this.#changed.fire();
  }

  rowAt(path: string): ReviewRow | null {
    return this.#rows.find((row) => row.item.path === path) ?? null;
  }

  /** Lists a review and judges it by headers, then, where there are few, by pixels. Resolves once rows are listed and judged by their
   *  headers. What is wrong stands in `problem`. */
  async begin(subject: ReviewSubject, only: Only): Promise<void> {
    this.stop();
    const { review } = this.#platform;
    const cancel = new vscode.CancellationTokenSource();
    this.#cancel = cancel;
    this.#session?.close();
    this.#session = null;
    Object.assign(this, { subject, only, problem: null, outdated: 'no', stage: 'listing' } as const);
    this.#rows = [];
    this.#changed.fire();
    try {
      if (review === null) throw new Refusal({ code: 'no-disk', severity: 'error', values: {} });
      const session = await review.open(subject, cancel.token);
      if (cancel.token.isCancellationRequested) return session.close();
      this.#session = session;
      this.#rows = session.items
        .map((item, index) => openRow(item, index))
        .filter(({ item }) => only === null || only.has(item.path) || only.has(item.oldPath));
      this.#to('headers');
      await this.#glance(session, cancel.token);
    } catch (error) {
      if (cancel.token.isCancellationRequested) return;
      this.problem = this.#problemOf(error);
    }
    if (cancel.token.isCancellationRequested) return;
    this.#to(null);
    const open = this.#rows.filter(({ settled }) => !settled);
    if (open.length <= AT_ONCE) void this.compare(open);
  }

  /** Compares the pixels of rows that were not compared yet. */
  async compare(rows: readonly ReviewRow[]): Promise<void> {
    const session = this.#session;
    const open = rows.filter(({ settled }) => !settled);
    if (session === null || open.length === 0 || this.stage !== null) return;
    this.#cancel ??= new vscode.CancellationTokenSource();
    const { token } = this.#cancel;
    this.#to('pixels');
    try {
      const indexes = open.map(({ index }) => index);
      const { jobs, memoryBytes } = readConfiguration(vscode.Uri.file(session.folder));
      await session.review(indexes, { jobs, memoryBytes }, token, (index, { verdict, impact, review, problems }) => {
        if (token.isCancellationRequested) return;
        this.#put(index, { verdict, impact, review, problems, settled: true });
      });
    } catch (error) {
      this.#log.error(error instanceof Error ? error : String(error));
    }
    if (!token.isCancellationRequested) this.#to(null);
  }

  /** The same subject once more. */
  async refresh(): Promise<void> {
    if (this.subject !== null) await this.begin(this.subject, this.only);
  }

  /** Ends what is being done and keeps what is known. */
  stop(): void {
    this.#cancel?.cancel();
    this.#cancel?.dispose();
    this.#cancel = null;
    this.#to(null);
  }

  /** The repository moved: whether that changes anything here is looked up once it is quiet. */
  outdate(): void {
    const kind = this.subject?.kind === 'range' ? this.subject.range.kind : 'files';
    if (kind === 'commit' || kind === 'files') return;
    this.#moved?.dispose();
    this.#moved = this.#platform.after(MOVED_MS, () => void this.#lookAgain());
  }

  dispose(): void {
    this.stop();
    this.#timer?.dispose();
    this.#moved?.dispose();
    this.#session?.close();
    this.#changed.dispose();
  }

  /** Lists the same once more, and says where it is otherwise. What cannot be listed, a refresh will say. */
  async #lookAgain(): Promise<void> {
    const { subject, stage, outdated } = this;
    const session = this.#session;
    const { review } = this.#platform;
    if (review === null || session === null || subject === null || stage !== null || outdated === 'yes') return;
    const cancel = new vscode.CancellationTokenSource();
    try {
      const now = await review.open(subject, cancel.token);
      const contents: string[] = [];
      await now.glance(cancel.token, (index, { content }) => contents.push(`${now.items[index].path} ${content}`));
      now.close();
      if (session !== this.#session || contents.sort().join('\n') === this.#contents) return;
      this.outdated = 'yes';
      this.#changed.fire();
    } catch (error) {
      if (!(error instanceof Refusal)) this.#log.error(error instanceof Error ? error : String(error));
    } finally {
      cancel.dispose();
    }
  }

  async #glance(session: ReviewSession, token: vscode.CancellationToken): Promise<void> {
    const found = new Map<number, GlancedItem>();
    let told = 0;
    await session.glance(token, (index, known) => {
      found.set(index, known);
      // One pass over thousands of rows for each of them would take longer than reading them.
      if (found.size - told < GLANCES_AT_ONCE) return;
      told = found.size;
      this.#glanced(found);
    });
    this.#glanced(found);
    const contents = [...found].map(([index, { content }]) => `${session.items[index].path} ${content}`);
    this.#contents = contents.sort().join('\n');
  }

  #glanced(found: ReadonlyMap<number, GlancedItem>): void {
    this.#rows = this.#rows.map((row) => {
      const known = found.get(row.index);
      if (known === undefined) return row;
      const { verdict, impact, settled } = known;
      // Other settings over the same file are another change each time.
      const content = row.item.status === 'treated' ? `${known.content} ${verdict.values.what ?? ''}` : known.content;
      return { ...row, verdict, impact, settled, content };
    });
    this.#soon();
  }

  #put(index: number, known: Partial<ReviewRow>): void {
    this.#rows = this.#rows.map((row) => (row.index === index ? { ...row, ...known } : row));
    this.#soon();
  }

  #to(stage: ReviewDesk['stage']): void {
    this.stage = stage;
    this.#rows = sortRows(this.#rows);
    this.#timer?.dispose();
    this.#timer = null;
    this.#changed.fire();
  }

  /** Rows come in heaps. */
  #soon(): void {
    this.#timer ??= this.#platform.after(QUIET_MS, () => {
      this.#timer = null;
      this.#rows = sortRows(this.#rows);
      this.#changed.fire();
    });
  }

  #problemOf(error: unknown): Problem {
    if (error instanceof Refusal) return error.problem;
    this.#log.error(error instanceof Error ? error : String(error));
    return { code: 'unexpected', severity: 'error', values: { reason: String(error) } };
  }
}

const QUIET_MS = 150;

const GLANCES_AT_ONCE = 64;

/** A repository moves in steps: a checkout, a build. */
const MOVED_MS = 1500;

/** So many are compared without being asked: some seconds of work. */
const AT_ONCE = 64;
