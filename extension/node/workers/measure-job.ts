import { decodeImage } from '../../../core/codec/decode.ts';
import { openImage } from '../../../core/codec/open.ts';
import { measureHalo } from '../../../core/finding/halo.ts';
import { placed, Refusal, refuse } from '../../../core/problem.ts';
import { expandIndexed } from '../../../core/raster/raster.ts';
import { type ReviewJob, runReviewJob } from './review-job.ts';
import { type Bench, type Outcome, readSource, runTextureJob, type TextureJob } from './texture-job.ts';

/** Anything that a worker may be asked to do. */
export type Job = TextureJob | ReviewJob;

/** Does what a job asks for. */
export async function runJob(job: Job, bench: Bench): Promise<Outcome> {
  switch (job.task) {
    case 'review': {
      const { versions } = bench;
      if (versions === undefined) throw new TypeError('Expected a bench that reads versions');
      return runReviewJob(job, { ...bench, versions });
    }
    case 'build':
      return runTextureJob(job, bench);
    case 'measure':
      return measure(job, bench);
  }
}

/** Bytes a sample that measuring holds beside the image: bounds of the range, and the floats of one image. */
const MEASURE_BYTES = 16;

/** Runs the chain and measures its overshoot; nothing is written. */
async function measure(job: TextureJob, bench: Bench): Promise<Outcome> {
  try {
    const bytes = await readSource(bench, job.image, job);
    const source = openImage(bytes, job.image.path, bench.ports.inflate, bench.ports);
    const { extent, channels } = source.header;
    const peakBytes = bytes.length + source.decodeBytes + MEASURE_BYTES * extent.width * extent.height * channels;
    if (peakBytes > job.memoryBytes) refuse('too-much-memory', { bytes: peakBytes, limit: job.memoryBytes });
    await bench.admit(peakBytes);
    if (bench.cancel.cancelled) return { kind: 'cancelled' };
    const image = await decodeImage(source);
    const raster = image.kind === 'indexed' ? expandIndexed(image) : image;
    return { kind: 'measured', halos: measureHalo(raster, job.treatment, bench.ports.engine) };
  } catch (error) {
    if (error instanceof Refusal) return { kind: 'failed', problem: placed(error.problem, job.image.path) };
    throw error;
  }
}
