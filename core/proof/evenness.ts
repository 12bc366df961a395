import type { ChainHead } from '../chain/layout.ts';
import { planChain } from '../chain/plan.ts';
import type { Taps } from '../kernel/taps.ts';
import type { Treatment } from '../treatment/treatment.ts';
import type { AxisEvenness, Evenness, PrintImage } from './want.ts';

/** How evenly an image that is made by moving codes repeats or leaves out the source's columns and rows. Null where its codes
 *  are not moved along axes, and for sheets and what a sampler shows between levels. Of a level, against the one that it is
 *  made from. */
export function evennessOf(head: ChainHead, treatment: Treatment, image: PrintImage): Evenness | null {
  if (treatment.grid !== null || 'lod' in image) return null;
  const plan = planChain(head, treatment);
  const planned = 'level' in image ? plan.levels[image.level] : plan.targets[0];
  if (planned?.method?.kind !== 'codes') return null;
  const place = 'place' in planned ? planned.place : { left: 0, top: 0 };
  const { x, y } = planned.method;
  const axes = { x: axisEvenness(x, place.left), y: axisEvenness(y, place.top) };
  const leaves = axes.x.left > 0 || axes.y.left > 0;
  return { ...axes, parts: leaves ? evenParts(x, y) : null };
}

/** One texel of n stands evenly where n divides both sides. */
function evenParts(x: Taps, y: Taps): NonNullable<Evenness['parts']> {
  const ratio = Math.max(x.from / x.to, y.from / y.to);
  const most = Math.min(x.from, y.from);
  const parts = Array.from({ length: most }, (_, i) => i + 1).filter((n) => x.from % n === 0 && y.from % n === 0);
  const smaller = parts.find((n) => n > ratio) ?? null;
  return { smaller, larger: parts.filter((n) => n < ratio).pop() ?? 1 };
}

/** `start` is where the picture begins in its image. */
function axisEvenness(taps: Taps, start: number): AxisEvenness {
  const { from, to, first } = taps;
  const widths = new Uint16Array(from);
  for (let texel = 0; texel < to; texel++) widths[first[texel]]++;
  const least = widths.reduce((one, other) => Math.min(one, other), to);
  const most = widths.reduce((one, other) => Math.max(one, other), 0);
  const uneven: number[] = [];
  // Repeated: those of the wider columns. Left out: those behind a wider gap.
  if (least > 0) {
    for (let texel = 0; texel < to; texel++) if (widths[first[texel]] > least) uneven.push(texel + start);
  } else {
    const gaps = Array.from({ length: to - 1 }, (_, texel) => first[texel + 1] - first[texel]);
    const narrow = gaps.reduce((one, other) => Math.min(one, other), from);
    for (const [texel, gap] of gaps.entries()) if (gap > narrow) uneven.push(texel + 1 + start);
  }
  return { least, most, left: widths.reduce((count, width) => count + (width === 0 ? 1 : 0), 0), uneven };
}
