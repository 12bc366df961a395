import { frontChannels, holdsColor } from '../chain/layout.ts';
import type { ChainPlan } from '../chain/plan.ts';
import { type Ktx2Layout, layoutKtx2 } from '../codec/ktx2/format.ts';
import type { Transfer } from '../color/transfer.ts';
import type { PlannedFile } from '../job.ts';
import type { ImageUse } from '../manifest/manifest.ts';
import type { ChannelCount, Depth, Extent } from '../raster/raster.ts';
import { outputPath } from '../treatment/find/names.ts';
import type { Content, Treatment } from '../treatment/treatment.ts';

/** One image that is shipped: what it is, and the PNG that holds it alone, if any. */
export interface PlannedImage {
  readonly use: ImageUse;
  readonly level?: number;
  readonly target?: string;
  readonly extent: Extent;
  readonly png: string | null;
}

/** A KTX2 file: which levels of which use it holds. */
export interface PlannedContainer {
  readonly use: ImageUse;
  readonly path: string;
  readonly levels: readonly number[];
}

export interface OutputPlan {
  readonly images: readonly PlannedImage[];
  readonly containers: readonly PlannedContainer[];
}

/** Every output of a chain, in the manifest's order: levels, targets, bounds and roughness, then containers. Level 0 has a
 *  PNG where its codes may differ from the source's, or the treatment asks for one. */
export function planOutputs(texture: string, plan: ChainPlan, levels: readonly PlannedLevelImage[]): OutputPlan {
  const { treatment } = plan;
  const uses: ImageUse[] = [
    'image',
    ...boundUses(treatment),
    ...(treatment.normal.roughness === null ? [] : (['roughness'] as const)),
  ];
  const images: PlannedImage[] = [];
  const containers: PlannedContainer[] = [];
  const pngs = treatment.outputs.includes('png');
  const path = (image: Omit<PlannedImage, 'png'>, extension: 'png' | 'ktx2'): string =>
    outputPath(texture, treatment, { ...image, extension });
  for (const use of uses) {
    const own = levels.filter(({ level }) => use === 'image' || use === 'roughness' || level > 0);
    for (const { level, extent } of own) {
      const image = { use, level, extent };
      const written =
        pngs &&
        (treatment.levels !== 'none' || treatment.png.base) &&
        (level > 0 || treatment.png.base || changesBase(plan, use));
      images.push({ ...image, png: written ? path(image, 'png') : null });
    }
    if (use === 'image' || use === 'roughness') {
      for (const target of plan.targets) {
        const image = { use, target: target.target.name, extent: target.place.whole };
        images.push({ ...image, png: pngs ? path(image, 'png') : null });
      }
    }
    if (treatment.outputs.includes('ktx2') && own.length > 0) {
      const extent = own[0].extent;
      containers.push({ use, path: path({ use, extent }, 'ktx2'), levels: own.map(({ level }) => level) });
    }
  }
  return { images, containers };
}

export interface PlannedLevelImage {
  readonly level: number;
  readonly extent: Extent;
}

export function plannedFiles(outputs: OutputPlan): readonly PlannedFile[] {
  const pngs = outputs.images.flatMap(({ png, ...image }) => (png === null ? [] : [{ ...image, path: png }]));
  const containers = outputs.containers.map(({ path, use, levels }) => {
    const first = outputs.images.find((image) => image.use === use && image.level === levels[0])!;
    return { path, use: 'container' as const, extent: first.extent };
  });
  return [...pngs, ...containers];
}

/** Whether level 0 may be stored with other codes than the source's. Roughness may be one channel of a larger file, or a
 *  constant that no file holds. */
export function changesBase(plan: ChainPlan, use: ImageUse): boolean {
  if (use === 'roughness') return true;
  const { treatment, head, layout } = plan;
  return (
    plan.fill === 'all' ||
    plan.depth !== head.depth ||
    head.gamma !== undefined ||
    (layout.normals.length > 0 && treatment.normal.base === 'renormalise')
  );
}

/** How a container of this use lays its texels. */
export function containerLayout(plan: ChainPlan, use: ImageUse, channels: ChannelCount, depth: Depth): Ktx2Layout {
  const { treatment } = plan;
  const single = use === 'roughness';
  return layoutKtx2({
    content: single ? 'data' : texelContent(plan),
    channels,
    depth,
    transfer: storedTransfer(treatment, channels),
    alpha: single ? 'data' : treatment.alpha.use,
    normalCount: channels === 2 ? 2 : treatment.normal.count,
    format: treatment.ktx2.format,
  });
}

/** Whether a container holds linear light, so that the chain is stored in that form too. */
export function wantsLinear(plan: ChainPlan, outputs: OutputPlan): boolean {
  const { channels } = plan.head;
  return outputs.containers.some(
    ({ use }) => use === 'image' && containerLayout(plan, use, channels, plan.depth).holds === 'linear-light',
  );
}

/** A packed file is color where its front channels are, else data. */
function texelContent(plan: ChainPlan): Content {
  if (plan.treatment.channels === null) return plan.treatment.content;
  return holdsColor(plan.layout) ? 'color' : 'data';
}

/** One transfer for all channels before alpha's place; where they differ no format can say so and codes are handed over as
 *  they are. */
function storedTransfer({ transfer }: Treatment, channels: ChannelCount): Transfer {
  if (typeof transfer === 'string') return transfer;
  const front = Array.from({ length: frontChannels(channels) }, (_, channel) => transfer[channel]);
  return front.every((each) => each === 'srgb') ? 'srgb' : 'linear';
}

function boundUses(treatment: Treatment): readonly ImageUse[] {
  return treatment.height.minmax ? ['min', 'max'] : [];
}
