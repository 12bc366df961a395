import { withoutBase } from '../chain/base-facts.ts';
import { planSheet, sheetNotes, targetExtent } from '../chain/grid.ts';
import type { ChainHead } from '../chain/layout.ts';
import { levelExtent } from '../chain/levels.ts';
import { chainBytes, sheetBytes } from '../chain/memory.ts';
import { type ChainPlan, phasesOf, planChain } from '../chain/plan.ts';
import { cellTreatment } from '../chain/sheet.ts';
import type { ColorChunk } from '../codec/source.ts';
import { obeyedGamma } from '../codec/tag.ts';
import { type BuildPlan, JOINED_BYTES } from '../job.ts';
import { refuse } from '../problem.ts';
import type { ChannelCount, Depth, Extent } from '../raster/raster.ts';
import type { Engine } from '../resample/engine.ts';
import { plainEngine } from '../resample/plain.ts';
import type { Treatment } from '../treatment/treatment.ts';
import {
  changesBase,
  containerLayout,
  type OutputPlan,
  type PlannedImage,
  plannedFiles,
  planOutputs,
  wantsLinear,
} from './outputs.ts';

/** What planning needs to know of a source: its header tells. */
export interface SourceFacts {
  readonly extent: Extent;
  readonly channels: ChannelCount;
  readonly depth: Depth;
  readonly indexed: boolean;
  readonly colorChunks: readonly ColorChunk[];
  /** Bytes of the file. */
  readonly fileBytes: number;
  /** Bytes that decoding holds beside the file. */
  readonly decodeBytes: number;
}

/** What a treatment makes of an image, known before a row is decoded. Throws Refusal where they do not fit. */
export function planTexture(
  texture: string,
  facts: SourceFacts,
  treatment: Treatment,
  engine: Engine = plainEngine,
): BuildPlan {
  const plan = planBuild(texture, facts, treatment, engine);
  return {
    files: plannedFiles(plan.outputs),
    phases: phasesOf(plan.chain),
    peakBytes: peakOf(facts, plan),
    notes: plan.notes,
  };
}

export interface TexturePlan {
  readonly head: ChainHead;
  readonly chain: ChainPlan;
  readonly outputs: OutputPlan;
  /** Bytes that one chain, of codes or of linear light, holds at its worst. */
  readonly chainBytes: number;
  readonly notes: readonly string[];
}

export function planBuild(texture: string, facts: SourceFacts, treatment: Treatment, engine: Engine): TexturePlan {
  const head = headOf(facts, treatment);
  if (treatment.grid === null) {
    const chain = planChain(head, treatment);
    const levels = chain.levels.filter((level) => level.shipped);
    const outputs = planOutputs(texture, chain, levels);
    const held = asksForBase(chain, outputs) ? chain : withoutBase(chain);
    return { head, chain: held, outputs, chainBytes: chainBytes(held, engine), notes: chain.notes };
  }
  if (treatment.normal.roughness !== null) refuse('roughness-grid', {});
  const sheet = planSheet(facts.extent, treatment.grid);
  const alone = cellTreatment(treatment, sheet);
  const cell = planChain({ ...head, extent: sheet.cell }, alone);
  const whole = planChain(head, { ...alone, targets: [] });
  const levels = cell.levels
    .filter((each) => each.shipped)
    .map(({ level }) => ({ level, extent: levelExtent(facts.extent, level) }));
  const targets = cell.targets.map((each) => {
    const extent = targetExtent(sheet, each.target);
    return { ...each, place: { whole: extent, picture: extent, left: 0, top: 0 } };
  });
  const chain = { ...whole, targets, treatment, keepsBase: true };
  return {
    head,
    chain,
    outputs: planOutputs(texture, chain, levels),
    chainBytes: sheetBytes(whole, cell, sheet.columns * sheet.rows, engine),
    notes: [...cell.notes, ...sheetNotes(sheet, treatment)],
  };
}

/** Whether an output holds the codes of level 0, or may. */
function asksForBase(chain: ChainPlan, { images, containers }: OutputPlan): boolean {
  if (chain.treatment.normal.roughness !== null || chain.treatment.png.base) return true;
  return (
    changesBase(chain, 'image') ||
    images.some(({ use, level, png }) => use === 'image' && level === 0 && png !== null) ||
    containers.some(({ use, levels }) => use === 'image' && levels.includes(0))
  );
}

function headOf(facts: SourceFacts, treatment: Treatment): ChainHead {
  const { extent, channels, depth, indexed } = facts;
  const colors = treatment.colorChunks === 'obey' && treatment.content === 'color' && treatment.channels === null;
  const gamma = colors ? obeyedGamma(facts.colorChunks) : null;
  // Where the settings say that codes are linear light already, no chunk says otherwise.
  return gamma === null || !holdsSrgb(treatment)
    ? { extent, channels, depth, indexed }
    : { extent, channels, depth, indexed: false, gamma };
}

function holdsSrgb({ transfer }: Treatment): boolean {
  return typeof transfer === 'string' ? transfer === 'srgb' : transfer.includes('srgb');
}

/** The file, what decoding and the chains hold, and the costliest output: as it is laid out, as it is deflated or handed
 *  over, and the colors of indices where it holds colors. */
export function peakOf(facts: SourceFacts, { head, chain, outputs, chainBytes }: TexturePlan): number {
  const { channels } = head;
  const codeBytes = chain.depth / 8;
  const containers = outputs.containers.map(({ use, levels }) => {
    const own = outputs.images.filter((image) => image.use === use && levels.includes(image.level ?? -1));
    const { format } = containerLayout(chain, use, use === 'roughness' ? 1 : channels, chain.depth);
    const expanded = head.indexed ? 2 * channels : 0;
    const bytes = texelsOf(own) * format.channels * codeBytes;
    // Deflated levels wait for each other; others go by a row at a time.
    const waiting = chain.treatment.ktx2.supercompress === 'none' ? 0 : bytes;
    return waiting + Math.min(bytes, JOINED_BYTES) + texelsOf(own) * expanded;
  });
  // A cell adds an alpha.
  const pngs = outputs.images.map((image) =>
    image.png === null ? 0 : 2 * texelsOf([image]) * codeBytes * (image.target === undefined ? channels : 4),
  );
  const chains = chainBytes * (wantsLinear(chain, outputs) ? 2 : 1);
  // Roughness is one channel of up to 16 bits: its source, its chain of a third, and twice that as a container.
  const roughness = chain.treatment.normal.roughness === null ? 0 : 6 * texelsOf([facts]);
  return facts.fileBytes + facts.decodeBytes + chains + roughness + Math.max(0, ...containers, ...pngs) + PORT_BYTES;
}

function texelsOf(images: readonly Pick<PlannedImage, 'extent'>[]): number {
  return images.reduce((sum, { extent }) => sum + extent.width * extent.height, 0);
}

/** What the streams of a port and the row filters hold for themselves: some buffers of up to 256 KiB. */
const PORT_BYTES = 1 << 20;
