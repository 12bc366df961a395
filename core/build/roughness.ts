import { buildChain, type Chain } from '../chain/chain.ts';
import { lettersOf } from '../chain/layout.ts';
import type { BuildJob } from '../job.ts';
import type { ManifestSource } from '../manifest/manifest.ts';
import type { Cancel, Ports } from '../port.ts';
import { placed, Refusal, refuse } from '../problem.ts';
import { newCodes, type StraightRaster } from '../raster/raster.ts';
import { sourcePath } from '../treatment/find/names.ts';
import type { Roughness, Treatment } from '../treatment/treatment.ts';
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
    const codes = new Uint8Array(extent.width * extent.height).fill(Math.floor(roughness.constant * 255 + 0.5));
    const raster: StraightRaster = { kind: 'straight', extent, channels: 1, depth: 8, codes };
    return { chain: compensate(raster, job.treatment, normals, ports), source: null };
  }
  const path = sourcePath(roughness.path, job.texture);
  const { raster, source } = await readChannel(job, path, roughness.channel, plan, ports, cancel).catch((error) => {
    throw error instanceof Refusal ? new Refusal(placed(error.problem, path)) : error;
  });
  return { chain: compensate(raster, job.treatment, normals, ports), source };
}

function compensate(raster: StraightRaster, treatment: Treatment, normals: Chain, ports: Ports): Chain {
  const lengths = new Map<string | number, Float32Array>();
  for (const [image, plane] of normals.lengths) lengths.set('level' in image ? image.level : image.target.name, plane);
  return buildChain(raster, roughnessTreatment(treatment), {
    ...(ports.engine && { engine: ports.engine }),
    lengthsOf: (image) => lengths.get('level' in image ? image.level : image.target.name) ?? null,
  });
}

/** The normal map's treatment for a single channel of roughness. */
function roughnessTreatment(treatment: Treatment): Treatment {
  return {
    ...treatment,
    content: 'data',
    channels: { r: 'roughness' },
    transfer: 'linear',
    alpha: { ...treatment.alpha, use: 'data', keepCoverage: false, store: 'straight' },
    fill: 'none',
    normal: { ...treatment.normal, base: 'keep', roughness: null },
  };
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
  const expected = plan.head.extent;
  if (extent.width !== expected.width || extent.height !== expected.height) {
    const say = (each: typeof extent): string => `${each.width}x${each.height}`;
    refuse('roughness-extent', { found: say(extent), expected: say(expected) });
  }
  const letters = lettersOf(channels);
  const channel = letters.indexOf(letter);
  if (channel < 0) refuse('channel-missing', { letter, channels, letters: letters.join(', ') });
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
