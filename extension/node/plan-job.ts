import { planTexture } from '../../core/chain/texture.ts';
import { openImage } from '../../core/codec/open.ts';
import type { BuildPlan } from '../../core/job.ts';
import { inflate } from './inflate.ts';
import type { TextureJob } from './texture-job.ts';

/** Plans a job from its files' headers; nothing is decoded. Throws Refusal. */
export function planJob(job: TextureJob, image: Uint8Array, roughness: Uint8Array | null): BuildPlan {
  const header = openImage(image, job.image.path, inflate).header;
  if (job.roughness === null || roughness === null) return planTexture(header, job.texture, job.treatment);
  const roughnessHeader = openImage(roughness, job.roughness.path, inflate).header;
  return planTexture(header, job.texture, job.treatment, roughnessHeader);
}
