import { planSheet, targetExtent } from '../chain/grid.ts';
import type { ChainHead } from '../chain/layout.ts';
import { levelExtent } from '../chain/levels.ts';
import { type ChainPlan, chainBytes, phasesOf, planChain } from '../chain/plan.ts';
import { cellTreatment } from '../chain/sheet.ts';
import type { ColorChunk } from '../codec/source.ts';
import { obeyedGamma } from '../codec/tag.ts';
import type { BuildPlan } from '../job.ts';
import { refuse } from '../problem.ts';
import type { ChannelCount, Depth, Extent } from '../raster/raster.ts';
import type { Treatment } from '../treatment/treatment.ts';
import { type OutputPlan, type PlannedImage, plannedFiles, planOutputs, wantsLinear } from './outputs.ts';

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
export function planTexture(texture: string, facts: SourceFacts, treatment: Treatment): BuildPlan {
  const plan = planBuild(texture, facts, treatment);
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
  readonly notes: readonly string[];
}

export function planBuild(texture: string, facts: SourceFacts, treatment: Treatment): TexturePlan {
  const head = headOf(facts, treatment);
  if (treatment.grid === null) {
    const chain = planChain(head, treatment);
    const levels = chain.levels.filter((level) => level.shipped);
    return { head, chain, outputs: planOutputs(texture, chain, levels), notes: chain.notes };
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
    notes: [...cell.notes, ...sheetNotes(treatment, sheet.notes)],
  };
}

function sheetNotes(treatment: Treatment, notes: readonly string[]): readonly string[] {
  return treatment.levels === 'none' ? [] : notes;
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

/** The file, what decoding and the chains hold, and the largest output twice: as it is laid out and as it is handed over. */
export function peakOf(facts: SourceFacts, { chain, outputs }: TexturePlan): number {
  const bytesPerTexel = 4 * (chain.depth / 8);
  const bytesOf = (images: readonly PlannedImage[]): number =>
    images.reduce((sum, { extent }) => sum + extent.width * extent.height * bytesPerTexel, 0);
  const containers = outputs.containers.map(({ use, levels }) =>
    bytesOf(outputs.images.filter((image) => image.use === use && levels.includes(image.level ?? -1))),
  );
  const pngs = outputs.images.filter((image) => image.png !== null).map((image) => bytesOf([image]));
  const chains = chainBytes(chain) * (wantsLinear(chain, outputs) ? 2 : 1);
  // Roughness is one channel of up to 16 bits: its source, its chain of a third, and twice that as a container.
  const roughness = chain.treatment.normal.roughness === null ? 0 : 6 * facts.extent.width * facts.extent.height;
  return facts.fileBytes + facts.decodeBytes + chains + roughness + 2 * Math.max(0, ...containers, ...pngs);
}
