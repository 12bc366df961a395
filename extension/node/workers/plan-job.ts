import { planTexture, type SourceFacts } from '../../../core/build/plan.ts';
import { factsOf } from '../../../core/build/source.ts';
import { openImage } from '../../../core/codec/open.ts';
import { PEEK_BYTES, peekImage } from '../../../core/codec/peek.ts';
import type { BuildPlan } from '../../../core/job.ts';
import { placed, Refusal, refuse } from '../../../core/problem.ts';
import type { Engine } from '../../../core/resample/engine.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import type { Disk } from '../files/disk.ts';
import { crc32 } from '../ports/crc.ts';
import { inflate } from '../ports/inflate.ts';
import type { TextureJob } from './texture-job.ts';

/** Plans a job from its files, which are checked and not decoded. Throws Refusal. */
export function planJob(job: TextureJob, image: Uint8Array, roughness: Uint8Array | null, engine?: Engine): BuildPlan {
  const opened = openImage(image, job.image.path, inflate, { crc32 });
  if (job.roughness !== null && roughness !== null) checkImage(roughness, job.roughness.path);
  return planTexture(job.texture, factsOf(opened, image.length + (roughness?.length ?? 0)), job.treatment, engine);
}

/** Plans a texture from the head of its file, as far as that tells: enough for the names of its outputs. Throws Refusal. */
export async function planFromHead(
  disk: Disk,
  texture: string,
  path: string,
  treatment: Treatment,
): Promise<BuildPlan> {
  return planTexture(texture, await readFacts(disk, path, treatment), treatment);
}

async function readFacts(disk: Disk, path: string, treatment: Treatment): Promise<SourceFacts> {
  const head = await disk.readHead(path, PEEK_BYTES);
  const stat = await disk.stat(path);
  if (head === null || stat === null) return refuse('source-unreadable', { reason: 'it cannot be opened' });
  const { extent, channels, depth, indexed, settled } = peekImage(head, path);
  if (settled && treatment.colorChunks === 'ignore') {
    return { extent, channels, depth, indexed, colorChunks: [], fileBytes: stat.size, decodeBytes: 0 };
  }
  const bytes = await disk.read(path);
  if (bytes === null) return refuse('source-unreadable', { reason: 'it cannot be opened' });
  return factsOf(openImage(bytes, path, inflate, { crc32 }), bytes.length);
}

function checkImage(bytes: Uint8Array, path: string): void {
  try {
    openImage(bytes, path, inflate, { crc32 });
  } catch (error) {
    throw error instanceof Refusal ? new Refusal(placed(error.problem, path)) : error;
  }
}
