import type { Chain } from '../chain/chain.ts';
import { constantRoughness, roughnessChain, roughnessIndex } from '../chain/roughness.ts';
import type { BuildJob } from '../job.ts';
import type { ManifestSource } from '../manifest/manifest.ts';
import type { Cancel, Ports } from '../port.ts';
import { placed, Refusal } from '../problem.ts';
import { newCodes, type StraightRaster } from '../raster/raster.ts';
import { sourcePath } from '../treatment/find/names.ts';
import type { Roughness } from '../treatment/treatment.ts';
import type { TexturePlan } from './plan.ts';
import { openSource, readSource } from './source.ts';

export interface BuiltRoughness {
  readonly chain: Chain;
  /** Null where roughness is a constant of the settings. */
  readonly source: ManifestSource | null;
}

/** The roughness chain that takes up what averaging takes from a normal map; null where none is asked for. */
export async function buildRoughness(
  job: BuildJob,
  plan: TexturePlan,
  normals: Chain,
  ports: Ports,
  cancel: Cancel,
): Promise<BuiltRoughness | null> {
  const { roughness } = job.treatment.normal;
  if (roughness === null) return null;
  const { extent } = plan.head;
  if ('constant' in roughness) {
    const raster = constantRoughness(roughness.constant, extent);
    return { chain: roughnessChain(raster, job.treatment, normals, ports.engine), source: null };
  }
  const path = sourcePath(roughness.path, job.texture);
  const { raster, source } = await readChannel(job, path, roughness.channel, plan, ports, cancel).catch((error) => {
    throw error instanceof Refusal ? new Refusal(placed(error.problem, path)) : error;
  });
  return { chain: roughnessChain(raster, job.treatment, normals, ports.engine), source };
}

async function readChannel(
  job: BuildJob,
  path: string,
  letter: Extract<Roughness, { path: string }>['channel'],
  plan: TexturePlan,
  ports: Ports,
  cancel: Cancel,
): Promise<{ readonly raster: StraightRaster; readonly source: ManifestSource }> {
  if (job.roughness === undefined) throw new RangeError('Expected a roughness map with the job');
  const opened = openSource(path, job.roughness, ports);
  const { extent, channels, depth } = opened.facts;
  const channel = roughnessIndex({ extent, channels }, letter, plan.head.extent);
  const codes = newCodes(depth, extent.width * extent.height);
  let filled = 0;
  const source = await readSource(opened, 'roughness', ports, cancel, (row) => {
    const palette = opened.palette?.palette;
    for (let x = 0; x < extent.width; x++) {
      codes[filled++] = palette === undefined ? row[x * channels + channel] : palette[row[x] * 4 + channel];
    }
  });
  return { raster: { kind: 'straight', extent, channels: 1, depth, codes }, source };
}
