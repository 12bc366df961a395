import { figure } from '../../../core/figures.ts';
import type { Sight } from '../../../core/proof/slot.ts';
import type { Model } from '../state/model.ts';
import type { Stop } from '../state/scale.ts';
import { t } from '../words/t.ts';

export function sightOf(stop: Stop): Sight {
  return 'level' in stop.image
    ? { kind: 'level', level: stop.image.level }
    : { kind: 'target', name: stop.image.target.name };
}

/** Between levels, to a hundredth of one; beyond the levels there is nothing to sample. */
export function sightBetween(model: Model, lod: number): Sight {
  const last = model.stops.filter((stop) => stop.kind === 'level').length - 1;
  const held = Math.min(last, Math.max(0, Math.round(lod * 100) / 100));
  return Number.isInteger(held) ? { kind: 'level', level: held } : { kind: 'lod', lod: held };
}

/** The next stop in a direction. */
export function stepFrom(
  stops: readonly Stop[],
  seen: { readonly lod: number; readonly stop: Stop | null },
  direction: number,
) {
  if (seen.stop !== null) {
    const index = stops.findIndex(({ label, kind }) => label === seen.stop!.label && kind === seen.stop!.kind);
    return stops[Math.min(stops.length - 1, Math.max(0, index + direction))];
  }
  const ahead = stops.filter((stop) => (direction > 0 ? stop.lod > seen.lod : stop.lod < seen.lod));
  return direction > 0 ? ahead[0] : ahead[ahead.length - 1];
}

/** Takes the sight to a level, and the cursor to the texel of it that overshoots most. */
export function goToWorst(model: Model, level: number): void {
  const worst = model.levels()?.halo.find((each) => each.level === level);
  const stop = model.stops.find((each) => 'level' in each.image && each.image.level === level);
  if (stop === undefined) return;
  const { width, height } = stop.extent;
  const cursor = worst === undefined ? {} : { u: (worst.x + 0.5) / width, v: (worst.y + 0.5) / height };
  model.set({
    sight: sightOf(stop),
    ...(worst !== undefined && { cursor: cursor as { u: number; v: number }, pan: { x: cursor.u!, y: cursor.v! } }),
  });
}

/** Where the sight stands, in words. */
export function valueText(model: Model): string {
  const { lod, extent, stop } = model.seen!;
  const size = t('{width} by {height}', { width: extent.width, height: extent.height });
  if (stop === null) return t('level {level}, between levels, {size} pixels', { level: figure(lod), size });
  return stop.kind === 'level'
    ? t('level {level}, {size} texels', { level: stop.label, size })
    : t('target {name}, {size} texels', { name: stop.label, size });
}
