import type { Cancel, Ports } from '../../../core/port.ts';
import { Cancelled } from '../../../core/port.ts';
import { Refusal } from '../../../core/problem.ts';
import { type Review, reviewTexture, type SideGiven } from '../../../core/review/review.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import type { FileRef } from '../git/changes.ts';
import type { Versions } from '../git/versions.ts';
import type { Outcome } from './texture-job.ts';

/** One texture to review, as it is posted to a worker, which reads both versions itself. */
export interface ReviewJob {
  readonly task: 'review';
  /** What problems of the worker name. */
  readonly image: { readonly path: string };
  readonly before: NamedVersion | null;
  readonly after: NamedVersion | null;
  readonly memoryBytes: number;
}

/** One version of a texture and the treatment that it has. */
export interface ReviewVersion {
  readonly file: FileRef;
  /** Where the settings of this end cannot be read, those of the other; null where neither can. */
  readonly treatment: Treatment | null;
}

export interface NamedVersion extends ReviewVersion {
  readonly path: string;
}

export interface ReviewBench {
  readonly ports: Ports;
  readonly cancel: Cancel;
  readonly versions: Versions;
  readonly admit: (peakBytes: number) => Promise<void>;
}

/** Reads both versions and compares them at all sizes. */
export async function runReviewJob(job: ReviewJob, bench: ReviewBench): Promise<Outcome> {
  const { ports, cancel, admit } = bench;
  try {
    const [before, after] = [await given(job.before, job, bench), await given(job.after, job, bench)];
    const options = { memoryBytes: job.memoryBytes, admit };
    const review: Review = await reviewTexture(before, after, ports, cancel, options);
    return { kind: 'reviewed', review };
  } catch (error) {
    if (error instanceof Cancelled) return { kind: 'cancelled' };
    throw error;
  }
}

async function given(version: NamedVersion | null, job: ReviewJob, { versions }: ReviewBench): Promise<SideGiven> {
  if (version === null) return null;
  const { file, treatment, path } = version;
  try {
    const bytes = await versions.content(file, job.memoryBytes);
    if (treatment !== null) return { path, bytes, treatment };
    return { problem: { code: 'settings-broken', severity: 'error', values: {} } };
  } catch (error) {
    if (error instanceof Refusal) return { problem: error.problem };
    throw error;
  }
}
