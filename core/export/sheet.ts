import { encodePng } from '../codec/png/encode.ts';
import type { Cancel } from '../port.ts';
import { type BenchPorts, ProofBench } from '../proof/bench.ts';
import { type Block, type Place, SHEET_WIDTH } from './block.ts';
import { type Box, Canvas } from './canvas.ts';
import { sameDeflate } from './deflate.ts';
import { footBlock } from './foot.ts';
import { headBlock } from './head.ts';
import { kernelSection, kernelSide } from './kernel-section.ts';
import { comparedSlots, kernelOf } from './kernels.ts';
import { readLook } from './look.ts';
import type { ProofOrder } from './order.ts';
import { GROUND } from './palette.ts';
import { comparedPrints, targetPrints } from './prints.ts';
import { cutSide, targetSection } from './target-section.ts';
import { sightOf, targetsOf } from './targets.ts';

/** A proof as one picture, and where its prints stand in it. */
export interface Sheet {
  /** A PNG file: RGB, 8 bits. */
  readonly png: Uint8Array;
  readonly places: readonly Place[];
  /** Every line of text, with the box that it takes. */
  readonly texts: readonly { readonly text: string; readonly box: Box }[];
}

/** Draws the proof sheet: what the texture is, every target at true size, the kernels compared at the sight, the numbers in
 *  words. Equal orders give equal bytes on every platform. Throws Refusal where the source or its settings cannot be read,
 *  Cancelled when asked to stop. */
export async function makeSheet(order: ProofOrder, ports: BenchPorts, cancel: Cancel): Promise<Sheet> {
  const bench = await ProofBench.open(order.image, order.name, ports);
  const { header } = bench;
  const { treatment, origins } = order.settings;
  const look = readLook(order.state, order.preferences);
  const all = targetsOf(header, treatment, look.typed);
  const targets = all.slice(0, MOST_TARGETS);
  const shown = await targetPrints(bench, targets, { treatment, fit: cutSide }, cancel);
  const sight = sightOf(targets, look, header.extent);
  const slots = comparedSlots(look.slots, treatment, { from: header.extent, to: sight.extent });
  const side = kernelSide(slots.length);
  const compared = await comparedPrints(bench, slots, { image: sight.image, treatment, origins, side }, cancel);
  const show = look.show ?? (treatment.alpha.use === 'mask' ? 'mask' : 'color');
  const view = { show, treatment, lamp: look.lamp, backdrop: look.backdrop };
  const blocks: readonly Block[] = [
    headBlock(header, order),
    ...targetSection(targets, shown, { view, sight: sight.target, left: all.length - targets.length }),
    ...kernelSection(slots, compared, {
      view,
      label: sight.label,
      extent: sight.extent,
      kernelOf: (each) => kernelOf(each, { from: header.extent, to: sight.extent }),
      origins,
    }),
    footBlock(order, { header, view, shown: [...shown, ...compared] }),
  ];
  const height = blocks.reduce((sum, block) => sum + block.height, 0);
  const canvas = new Canvas({ width: SHEET_WIDTH, height }, GROUND);
  const places: Place[] = [];
  let top = 0;
  for (const block of blocks) {
    places.push(...block.draw(canvas, top));
    top += block.height;
  }
  const raster = { kind: 'straight', extent: canvas.extent, channels: 3, depth: 8, codes: canvas.codes } as const;
  return { png: await encodePng(raster, sameDeflate), places, texts: canvas.texts };
}

/** More targets than this are left out, in words. */
const MOST_TARGETS = 64;
