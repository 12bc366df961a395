import type { FileTree } from '../../core/port.ts';
import type { Disk } from './files/disk.ts';
import { nodeDisk } from './files/node-disk.ts';
import { nodePorts } from './ports/ports.ts';
import { type BuildReport, type BuildTools, buildProject, type Reporter } from './project/build.ts';
import { type CheckReport, checkProject } from './project/check.ts';
import { inspectTexture } from './project/inspect.ts';
import { rebuildProject } from './project/rebuild.ts';
import { cacheFolder } from './project/stat-index.ts';
import { defaultMemoryBytes } from './workers/memory.ts';
import { defaultWorkers, runInWorkers } from './workers/pool.ts';

/** What is to be worked on. Paths are absolute. Null leaves a number to the machine. */
interface Order {
  readonly paths: readonly string[];
  readonly jobs: number | null;
  readonly memoryBytes: number | null;
}

interface CancelToken {
  readonly isCancellationRequested: boolean;
  onCancellationRequested(listener: () => void): { dispose(): void };
}

/** The project's work as an editor asks for it, on this machine's disk and in worker threads. `workerUrl` is the bundled
 *  pool.worker.ts. */
export function openDoor(workerUrl: URL) {
  const cache = cacheFolder(process.env, process.platform);
  return {
    tree: nodeDisk as FileTree,
    build(order: Order & { readonly orphans: 'keep' | 'prune' }, cancel: CancelToken, progress: Reporter) {
      return withTools(order, cancel, (tools, memoryBytes): Promise<BuildReport> => {
        const query = { folder: '/', paths: order.paths };
        return buildProject(
          { query, mode: 'build', orphans: order.orphans, memoryBytes, cacheFolder: cache },
          tools,
          progress,
        );
      });
    },
    rebuild(order: Order & { readonly algorithm: 'recorded' | 'new' }, cancel: CancelToken, progress: Reporter) {
      return withTools(order, cancel, (tools, memoryBytes): Promise<BuildReport> => {
        const { paths, algorithm } = order;
        return rebuildProject({ folder: '/', paths, sourceRoot: null, algorithm, memoryBytes }, tools, progress);
      });
    },
    check(order: Order, cancel: CancelToken) {
      return withTools(order, cancel, (tools, memoryBytes): Promise<CheckReport> => {
        const query = { folder: '/', paths: order.paths };
        const options = {
          query,
          look: 'with outputs',
          cacheFolder: cache,
          memoryBytes,
          nameOf: (path: string) => path,
        } as const;
        return checkProject(options, { ...tools, ports: nodePorts });
      });
    },
    inspect: (path: string, unsaved: ReadonlyMap<string, string>) => inspectTexture(typedOver(nodeDisk, unsaved), path),
  };

  async function withTools<T>(
    order: Order,
    cancel: CancelToken,
    work: (tools: BuildTools, memoryBytes: number) => Promise<T>,
  ): Promise<T> {
    const memoryBytes = order.memoryBytes ?? defaultMemoryBytes();
    const flag = new SharedArrayBuffer(4);
    const stop = () => Atomics.store(new Int32Array(flag), 0, 1);
    if (cancel.isCancellationRequested) stop();
    const listening = cancel.onCancellationRequested(stop);
    try {
      const workers = order.jobs ?? defaultWorkers();
      const run = runInWorkers({ workerUrl, workers, memoryBytes, cancel: flag });
      return await work({ disk: nodeDisk, run, isCancelled: () => cancel.isCancellationRequested }, memoryBytes);
    } finally {
      listening.dispose();
    }
  }
}

/** The disk as it would be with these texts saved. */
function typedOver(disk: Disk, unsaved: ReadonlyMap<string, string>): Disk {
  if (unsaved.size === 0) return disk;
  return {
    ...disk,
    async read(path) {
      const text = unsaved.get(path);
      return text === undefined ? disk.read(path) : new TextEncoder().encode(text);
    },
  };
}
