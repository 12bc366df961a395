import { type Chain, ChainRun } from '../chain/chain.ts';
import type { Light } from '../chain/plan.ts';
import { buildSheet } from '../chain/sheet.ts';
import type { ManifestSource } from '../manifest/manifest.ts';
import { type Codes, type IndexedRaster, newCodes, type StraightRaster } from '../raster/raster.ts';
import type { Engine } from '../resample/engine.ts';
import { wantsLinear } from './outputs.ts';
import type { TexturePlan } from './plan.ts';
import type { OpenedSource } from './source.ts';

export interface BuiltChains {
  readonly source: ManifestSource;
  /** Codes as PNG holds them and as most containers do. */
  readonly coded: Chain;
  /** The same chain stored as linear light, for containers whose format cannot say sRGB; null where none asks for it. */
  readonly linear: Chain | null;
}

/** Reads the source once and builds its chain, in each form that an output asks for. */
export async function buildChains(
  source: OpenedSource,
  plan: TexturePlan,
  engine: Engine,
  read: (take: (codes: Codes) => void) => Promise<ManifestSource>,
): Promise<BuiltChains> {
  const lights: Light[] = wantsLinear(plan.chain, plan.outputs) ? ['coded', 'linear'] : ['coded'];
  const { treatment } = plan.chain;
  if (treatment.grid !== null) {
    const sheet = blankSource(source);
    const samples = sheet.kind === 'indexed' ? sheet.indices : sheet.codes;
    let filled = 0;
    const described = await read((codes) => {
      samples.set(codes, filled);
      filled += codes.length;
    });
    const gamma = plan.head.gamma === undefined ? {} : { gamma: plan.head.gamma };
    const [coded, linear = null] = lights.map((light) => buildSheet(sheet, treatment, { engine, light, ...gamma }));
    return { source: described, coded, linear };
  }
  const runs = lights.map((light) => {
    const base = plan.chain.keepsBase ? 'kept' : 'dropped';
    const run = new ChainRun(plan.head, treatment, { engine, light, base });
    if (source.palette !== null) run.setPalette(source.palette);
    return run;
  });
  const described = await read((codes) => {
    for (const run of runs) run.push(codes);
  });
  const [coded, linear = null] = runs.map((run) => run.finish());
  return { source: described, coded, linear };
}

function blankSource({ image, palette }: OpenedSource): StraightRaster | IndexedRaster {
  const { extent, channels, depth } = image.header;
  const texels = extent.width * extent.height;
  if (palette !== null) return { ...palette, indices: new Uint8Array(texels) };
  return { kind: 'straight', extent, channels, depth, codes: newCodes(depth, texels * channels) };
}
