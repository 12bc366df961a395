import { type Cancel, Cancelled } from '../../../core/port.ts';
import { nodeDisk } from '../files/node-disk.ts';
import { parentOf } from '../files/path.ts';
import { listBranches, listCommits } from '../git/log.ts';
import type { Range } from '../git/range.ts';
import { openRepository } from '../git/repository.ts';
import { openVersions, type Versions } from '../git/versions.ts';
import { defaultMemoryBytes } from '../workers/memory.ts';
import { defaultWorkers, runInWorkers } from '../workers/pool.ts';
import { listFiles } from './files.ts';
import { type GlancedEntry, glanceEntries } from './glance.ts';
import { judgedReview } from './judge.ts';
import { listReview, type ReviewList } from './list.ts';
import { reviewEntries } from './run.ts';
import { sidesOf } from './sides.ts';

interface CancelToken {
  readonly isCancellationRequested: boolean;
  onCancellationRequested(listener: () => void): { dispose(): void };
}

type Subject =
  | { readonly kind: 'range'; readonly folder: string; readonly range: Range }
  | { readonly kind: 'files'; readonly before: string; readonly after: string };

/** Reviews as an editor asks for them, by the Git of this machine and in worker threads. `workerUrl` is the bundled
 *  pool.worker.ts. */
export function openReviewDoor(workerUrl: URL) {
  return {
    repositoryOf: async (folder: string) => (await openRepository(folder)).folder,
    commits: listCommits,
    branches: listBranches,
    async open(subject: Subject, token: CancelToken) {
      const versions = openVersions(nodeDisk);
      try {
        return sessionOf(await listOf(subject, versions, cancelOf(token)), versions, workerUrl);
      } catch (error) {
        versions.close();
        throw error;
      }
    },
  };
}

function listOf(subject: Subject, versions: Versions, cancel: Cancel): Promise<ReviewList> {
  if (subject.kind === 'files') {
    const { before, after } = subject;
    return listFiles(nodeDisk, parentOf(after), [before, after]);
  }
  return listReview(subject.folder, subject.range, { disk: nodeDisk, versions }, cancel);
}

function sessionOf(list: ReviewList, versions: Versions, workerUrl: URL) {
  const { entries } = list;
  return {
    folder: list.folder,
    before: list.before,
    after: list.after,
    outputs: list.outputs,
    excluded: list.excluded,
    problems: list.problems,
    items: entries.map(({ path, oldPath, status, manifest, problems }) => ({
      path,
      oldPath,
      status,
      manifest,
      problems,
    })),
    async glance(token: CancelToken, done: (index: number, known: Known) => void): Promise<void> {
      const told = (index: number, { glance, content }: GlancedEntry) => done(index, { ...glance, content });
      await untilCancelled(glanceEntries(entries, { disk: nodeDisk, versions }, cancelOf(token), told));
    },
    async review(
      indexes: readonly number[],
      allowance: { readonly jobs: number | null; readonly memoryBytes: number | null },
      token: CancelToken,
      done: (index: number, known: Reviewed) => void,
    ): Promise<void> {
      const flag = new SharedArrayBuffer(4);
      const stop = () => Atomics.store(new Int32Array(flag), 0, 1);
      if (token.isCancellationRequested) stop();
      const listening = token.onCancellationRequested(stop);
      const memoryBytes = allowance.memoryBytes ?? defaultMemoryBytes();
      const workers = allowance.jobs ?? defaultWorkers();
      const run = runInWorkers({ workerUrl, workers, memoryBytes, cancel: flag });
      try {
        const asked = indexes.map((index) => entries[index]);
        await reviewEntries(asked, { run, memoryBytes }, (at, reviewed) => {
          const { verdict, impact, review, problems } = judgedReview(reviewed);
          done(indexes[at], { verdict, impact, review, problems });
        });
      } finally {
        listening.dispose();
      }
    },
    async sides(index: number) {
      return sidesOf(entries[index], versions);
    },
    close: () => versions.close(),
  };
}

type Known = GlancedEntry['glance'] & { readonly content: string };
type Reviewed = Pick<ReturnType<typeof judgedReview>, 'verdict' | 'impact' | 'review' | 'problems'>;

function cancelOf(token: CancelToken): Cancel {
  return {
    get cancelled() {
      return token.isCancellationRequested;
    },
  };
}

async function untilCancelled(work: Promise<void>): Promise<void> {
  try {
    await work;
  } catch (error) {
    if (!(error instanceof Cancelled)) throw error;
  }
}
