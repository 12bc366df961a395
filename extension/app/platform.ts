import type { ProofOrder } from '../../core/export/order.ts';
import type { Manifest } from '../../core/manifest/manifest.ts';
import type { FileTree, Ports } from '../../core/port.ts';
import type { Problem } from '../../core/problem.ts';
import type { FromBench, ToBench } from '../../core/proof/want.ts';

/** What the entry hands to the app: everything that depends on where the extension host runs. */
export interface Platform {
  readonly ports: Ports;
  /** Where textures lie on a disk; null in a host that has none. */
  readonly disk: DiskDoor | null;
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

export interface Order {
  /** Files or folders. */
  readonly paths: readonly string[];
  /** Null leaves it to the machine. */
  readonly jobs: number | null;
  /** Null leaves it to the machine. */
  readonly memoryBytes: number | null;
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
