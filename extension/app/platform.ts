import type { ProofOrder } from '../../core/export/order.ts';
import type { Manifest } from '../../core/manifest/manifest.ts';
import type { FileTree, Ports } from '../../core/port.ts';
import type { Problem } from '../../core/problem.ts';
import type { FromBench, ToBench } from '../../core/proof/want.ts';
import type { Impact } from '../../core/review/impact.ts';
import type { Review } from '../../core/review/review.ts';
import type { Verdict } from '../../core/review/verdict.ts';
import type { PairSide } from '../../core/review/want.ts';

/** What the entry hands to the app: everything that depends on where the extension host runs. */
export interface Platform {
  readonly ports: Ports;
  /** Where textures lie on a disk; null in a host that has none. */
  readonly disk: DiskDoor | null;
  /** Where changes come from; null in a host that can run no Git. */
  readonly review: ReviewDoor | null;
  /** Starts a worker that makes prints as a page's own does; null where the host has none. */
  readonly startBench: (() => BenchWorker) | null;
  /** A text that nobody can guess, for the page's policy. */
  newNonce(): string;
  /** Draws a proof sheet (core/export/sheet.ts, `makeSheet`) where it holds nobody up. Throws Refusal, and Cancelled. */
  drawSheet(order: ProofOrder, cancel: CancelToken): Promise<Uint8Array>;
  encodeUtf8(text: string): Uint8Array;
  /** Calls once, after a while; disposing calls it off. */
  after(milliseconds: number, act: () => void): { dispose(): void };
}

/** A worker behind core's Desk. */
export interface BenchWorker {
  post(message: ToBench): void;
  /** Calls back for each message, and once with null where the worker ended by itself. */
  listen(take: (message: FromBench | null) => void): void;
  stop(): void;
}

/** The engine's work on a disk. Paths are absolute and "/"-separated. */
export interface DiskDoor {
  readonly tree: FileTree;
  build(order: BuildOrder, cancel: CancelToken, progress: Progress): Promise<BuildReport>;
  rebuild(order: RebuildOrder, cancel: CancelToken, progress: Progress): Promise<BuildReport>;
  check(order: Order, cancel: CancelToken): Promise<CheckReport>;
  /** How a texture's outputs stand to what is asked for now. `unsaved` holds texts that are typed and not saved, by path. Null
   *  where it is no texture. */
  inspect(path: string, unsaved: ReadonlyMap<string, string>): Promise<Inspection | null>;
}

/** What work may take. */
export interface Allowance {
  /** Null leaves it to the machine. */
  readonly jobs: number | null;
  /** Null leaves it to the machine. */
  readonly memoryBytes: number | null;
}

export interface Order extends Allowance {
  /** Files or folders. */
  readonly paths: readonly string[];
}

export interface BuildOrder extends Order {
  readonly orphans: 'keep' | 'prune';
}

export interface RebuildOrder extends Order {
  readonly algorithm: 'recorded' | 'new';
}

/** As vscode.CancellationToken. */
export interface CancelToken {
  readonly isCancellationRequested: boolean;
  onCancellationRequested(listener: () => void): { dispose(): void };
}

export interface Progress {
  begin(count: number): void;
  done(texture: { readonly source: string }): void;
}

export interface BuildReport {
  readonly textures: readonly {
    readonly source: string;
    readonly manifest: string;
    readonly action: 'built' | 'unchanged' | 'failed' | 'planned' | 'cancelled';
    readonly reasons: readonly string[];
    readonly outputs: readonly string[];
  }[];
  readonly pruned: readonly string[];
  readonly problems: readonly Problem[];
  readonly cancelled: boolean;
}

export interface CheckReport {
  readonly textures: readonly {
    readonly source: string;
    readonly manifest: string;
    readonly moved: readonly string[];
  }[];
  readonly orphans: readonly { readonly manifest: string }[];
  readonly problems: readonly Problem[];
  readonly cancelled: boolean;
}

export interface Inspection {
  readonly outFolder: string;
  readonly manifestPath: string;
  readonly manifest: Manifest | null;
  /** Empty where nothing moved; `new` where it was never built. */
  readonly reasons: readonly string[];
  /** Files that the manifest lists and that are there. */
  readonly outputs: readonly string[];
}

/** Reviews over Git's plumbing. Paths are absolute and "/"-separated. Everything throws Refusal where Git cannot tell. */
export interface ReviewDoor {
  /** The top of the repository that a folder lies in. */
  repositoryOf(folder: string): Promise<string>;
  /** Commits before HEAD, the last one first, at most `count`; of one file where a path is given. */
  commits(folder: string, path: string | null, count: number): Promise<readonly CommitLine[]>;
  /** Branches, here and of remotes, the one that moved last first. */
  branches(folder: string): Promise<readonly BranchLine[]>;
  /** Lists what a review is about; no picture is read. */
  open(subject: ReviewSubject, cancel: CancelToken): Promise<ReviewSession>;
}

export interface CommitLine {
  readonly id: string;
  readonly subject: string;
  readonly author: string;
  /** Seconds since 1970. */
  readonly time: number;
}

export interface BranchLine {
  readonly name: string;
  readonly current: 'yes' | 'no';
  readonly time: number;
}

/** What is compared with what. */
export type ReviewSubject =
  | { readonly kind: 'range'; readonly folder: string; readonly range: ReviewRange }
  | { readonly kind: 'files'; readonly before: string; readonly after: string };

export type ReviewRange =
  | { readonly kind: 'working' }
  | { readonly kind: 'index' }
  | { readonly kind: 'commit'; readonly commit: string }
  | { readonly kind: 'branch'; readonly base: string; readonly tip: string };

/** Changed textures, and what can be learned of them. It holds a Git until it is closed. */
export interface ReviewSession {
  /** The top of the repository. */
  readonly folder: string;
  /** How people call the two ends. */
  readonly before: string;
  readonly after: string;
  readonly items: readonly ReviewItem[];
  /** Changed images that are no textures: written by a build, or excluded. */
  readonly outputs: number;
  readonly excluded: number;
  /** Of parts that could not be looked into. */
  readonly problems: readonly Problem[];
  /** Judges items by ids and headers, in their order, each as soon as it is known. Ends early when asked to stop. */
  glance(cancel: CancelToken, done: (index: number, known: GlancedItem) => void): Promise<void>;
  /** Compares the pixels of items at every size, in any order. Ends early when asked to stop. */
  review(
    indexes: readonly number[],
    allowance: Allowance,
    cancel: CancelToken,
    done: (index: number, known: ReviewedItem) => void,
  ): Promise<void>;
  /** Both versions, for a page. */
  sides(index: number): Promise<{ readonly before: PairSide; readonly after: PairSide }>;
  close(): void;
}

export interface ReviewItem {
  /** From the top of the repository. */
  readonly path: string;
  /** What it was called before; the same unless it was renamed. */
  readonly oldPath: string;
  readonly status: 'added' | 'removed' | 'changed' | 'renamed' | 'retyped' | 'unmerged' | 'treated';
  readonly manifest: 'none' | 'fresh' | 'stale';
  /** Of the settings that apply. */
  readonly problems: readonly Problem[];
}

export interface GlancedItem {
  readonly verdict: Verdict;
  readonly impact: Impact;
  /** Whether pixels could say more. */
  readonly settled: boolean;
  /** Equal for the same two contents. */
  readonly content: string;
}

export interface ReviewedItem {
  readonly verdict: Verdict;
  readonly impact: Impact;
  /** Null where it could not be done. */
  readonly review: Review | null;
  /** Limits that are passed, and what went wrong. */
  readonly problems: readonly Problem[];
}
