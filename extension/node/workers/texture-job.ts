import type { Halo } from '../../../core/finding/halo.ts';
import type { BuildPlan, BuildTexture } from '../../../core/job.ts';
import type { Manifest } from '../../../core/manifest/manifest.ts';
import type { Cancel, Ports } from '../../../core/port.ts';
import { type Problem, placed, Refusal, refuse } from '../../../core/problem.ts';
import type { Review } from '../../../core/review/review.ts';
import { joinPath } from '../../../core/treatment/paths/path.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import type { Disk } from '../files/disk.ts';
import { type LaidFile, openLaydown, type Pause } from '../files/laydown.ts';
import type { Versions } from '../git/versions.ts';

/** One texture to build, as it is posted to a worker. Paths are absolute unless they say otherwise. */
export interface TextureJob {
  /** `measure` runs the chain for its findings and writes nothing. */
  readonly task: 'build' | 'measure';
  /** Root-relative; what the manifest and the problems know it by. */
  readonly texture: string;
  readonly image: JobFile;
  readonly roughness: JobFile | null;
  readonly treatment: Treatment;
  readonly outFolder: string;
  readonly manifestPath: string;
  /** The folder that no output may leave. */
  readonly within: string;
  /** Whether references are relative to the root for want of a way from the manifest. */
  readonly base: 'root' | null;
  readonly memoryBytes: number;
}

export interface JobFile {
  readonly path: string;
  /** As the manifest writes it. */
  readonly reference: string;
  /** What a rebuild must find; any other content is refused. `null` takes what there is. */
  readonly sha256: string | null;
}

/** What became of a job. Warnings name files that were kept. */
export type Outcome =
  | {
      readonly kind: 'built';
      readonly manifest: Manifest;
      /** As they lie there now, the manifest among them. */
      readonly files: readonly LaidFile[];
      readonly warnings: readonly Problem[];
    }
  | { readonly kind: 'measured'; readonly halos: readonly Halo[] }
  | { readonly kind: 'reviewed'; readonly review: Review }
  | { readonly kind: 'failed'; readonly problem: Problem }
  | { readonly kind: 'cancelled' };

/** What a job runs on. */
export interface Bench {
  readonly disk: Disk;
  readonly ports: Ports;
  readonly cancel: Cancel;
  readonly buildTexture: BuildTexture;
  /** Bytes that the job will hold at its worst, known from the headers. Throws Refusal. */
  readonly planJob: (job: TextureJob, image: Uint8Array, roughness: Uint8Array | null) => BuildPlan;
  /** Waits until the bytes may be held. */
  readonly admit: (peakBytes: number) => Promise<void>;
  readonly wait?: Pause;
  /** Reads versions of files, for reviews. */
  readonly versions?: Versions;
}

/** Builds one texture and lays its outputs down. Bad data and a disk that fails are outcomes, not exceptions; what else is
 *  thrown means that the process is ending, or that the house is wrong. */
export async function runTextureJob(job: TextureJob, bench: Bench): Promise<Outcome> {
  const laydown = openLaydown(bench.disk, job, bench.wait);
  let peakBytes = 0;
  try {
    const image = await readSource(bench, job.image, job);
    const roughness = job.roughness === null ? null : await readSource(bench, job.roughness, job);
    peakBytes = bench.planJob(job, image, roughness).peakBytes;
    if (peakBytes > job.memoryBytes) refuse('too-much-memory', { bytes: peakBytes, limit: job.memoryBytes });
    await bench.admit(peakBytes);
    if (bench.cancel.cancelled) return { kind: 'cancelled' };
    const manifest = await bench.buildTexture(
      {
        texture: job.texture,
        image: { bytes: image, reference: job.image.reference },
        ...(job.roughness === null || roughness === null
          ? {}
          : { roughness: { bytes: roughness, reference: job.roughness.reference } }),
        treatment: job.treatment,
        memoryBytes: job.memoryBytes,
      },
      bench.ports,
      bench.cancel,
      (file) => laydown.write(joinPath(job.outFolder, file.path), file),
    );
    if (bench.cancel.cancelled) {
      await laydown.abort();
      return { kind: 'cancelled' };
    }
    const laid = await laydown.commit(job.base === null ? manifest : { ...manifest, base: job.base });
    return { kind: 'built', manifest, ...laid };
  } catch (error) {
    await laydown.abort();
    if (error instanceof Refusal) return { kind: 'failed', problem: placed(error.problem, job.image.path) };
    if (bench.cancel.cancelled) return { kind: 'cancelled' };
    if (!isOutOfMemory(error)) throw error;
    const values = { bytes: peakBytes, limit: job.memoryBytes };
    return { kind: 'failed', problem: { code: 'too-much-memory', severity: 'error', values, path: job.image.path } };
  }
}

/** Reads a job's file, if it is there, small enough and the one that is expected. Throws Refusal. */
export async function readSource({ disk, ports }: Bench, file: JobFile, job: TextureJob): Promise<Uint8Array> {
  const stat = await disk.stat(file.path);
  if (stat === null) return refuse('source-missing', {}, { path: file.path });
  if (stat.size > job.memoryBytes) {
    refuse('too-much-memory', { bytes: stat.size, limit: job.memoryBytes }, { path: file.path });
  }
  const bytes = await disk.read(file.path);
  if (bytes === null) return refuse('source-unreadable', { reason: 'it cannot be opened' }, { path: file.path });
  if (file.sha256 === null) return bytes;
  const hash = ports.newHash();
  hash.update(bytes);
  const now = hash.hex();
  if (now !== file.sha256) refuse('source-moved', { now, recorded: file.sha256 }, { path: file.path });
  return bytes;
}

/** What JavaScript engines throw where an array finds no memory. */
function isOutOfMemory(error: unknown): boolean {
  return error instanceof RangeError && /allocation failed|invalid array buffer length/i.test(error.message);
}
