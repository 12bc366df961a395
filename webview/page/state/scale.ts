import { levelCount, levelExtent, targetPlace } from '../../../core/chain/levels.ts';
import type { PrintImage } from '../../../core/proof/want.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import type { Target } from '../../../core/treatment/treatment.ts';

/** A place where the sight comes to rest: a level or a target. */
export interface Stop {
  /** Place on the axis: levels are whole numbers, magnified targets lie below 0. */
  readonly lod: number;
  readonly image: Exclude<PrintImage, { readonly lod: number }>;
  readonly extent: Extent;
  readonly kind: 'level' | 'target' | 'typed';
  /** `3`, `48x48`, `badge`. */
  readonly label: string;
}

/** What a stop is to the axis itself, whatever stands behind it. */
export type Placed = Omit<Stop, 'image'>;

/** Every stop of a texture from large to small. `lastLevel` is the last one that the texture has, or that a sheet allows. */
export function stopsOf(
  base: Extent,
  targets: readonly Target[],
  typed: readonly Target[],
  lastLevel: number = levelCount(base) - 1,
): readonly Stop[] {
  const levels = Array.from({ length: lastLevel + 1 }, (_, level): Stop => {
    return { lod: level, image: { level }, extent: levelExtent(base, level), kind: 'level', label: String(level) };
  });
  const placed =
    (kind: 'target' | 'typed') =>
    (target: Target): Stop => {
      const { whole, picture } = targetPlace(base, target);
      return { lod: lodOfExtent(base, picture), image: { target }, extent: whole, kind, label: target.name };
    };
  const all = [...levels, ...targets.map(placed('target')), ...typed.map(placed('typed'))];
  return all.sort((one, other) => one.lod - other.lod || KINDS[one.kind] - KINDS[other.kind]);
}

const KINDS = { level: 0, target: 1, typed: 2 } as const;

/** Where an extent lies on the axis: by its longer side. */
export function lodOfExtent(base: Extent, extent: Extent): number {
  return Math.log2(Math.max(base.width, base.height) / Math.max(extent.width, extent.height));
}

/** Screen pixels of the texture between levels: 2^-lod of it, at least 1. */
export function extentAt(base: Extent, lod: number): Extent {
  const of = (texels: number): number => Math.max(1, Math.round(texels / 2 ** lod));
  return { width: of(base.width), height: of(base.height) };
}

/** One typed size, or several scales with spaces or commas between, as a set of densities is written. Null for anything else. */
export function readSizes(text: string, base: Extent): readonly Target[] | null {
  const one = readSize(text, base);
  if (one !== null) return [one];
  const words = text.split(/[\s,]+/).filter((word) => word !== '');
  const scales = words.map((word) => (/x$/i.test(word) ? readSize(word, base) : null));
  return words.length > 0 && scales.every((scale) => scale !== null) ? distinct(scales) : null;
}

function distinct(targets: readonly Target[]): readonly Target[] {
  return targets.filter((target, index) => targets.findIndex(({ name }) => name === target.name) === index);
}

/** What a typed size means for a texture: `2x` or `1/3x` a scale, `64` the longer side, `64x48` an extent where it has the texture's
 *  proportions and a cell where it has not. Null for anything else. */
export function readSize(text: string, base: Extent): Target | null {
  const scale = /^\s*(\d*\.?\d+)(?:\s*\/\s*(\d+))?\s*x\s*$/i.exec(text);
  if (scale !== null) {
    const [, over, under] = scale;
    const factor = Number(over) / Number(under ?? 1);
    const name = under === undefined ? `${factor}x` : `${Number(over)}/${Number(under)}x`;
    return factor >= 1 / 1024 && factor <= 64 ? { name, scale: factor } : null;
  }
  const sides = /^\s*(\d+)\s*(?:[x×,\s]\s*(\d+))?\s*$/i.exec(text);
  if (sides === null) return null;
  const first = Number(sides[1]);
  if (first < 1) return null;
  const longer = Math.max(base.width, base.height);
  const [width, height] =
    sides[2] === undefined
      ? [base.width, base.height].map((side) => Math.max(1, Math.round((side * first) / longer)))
      : [first, Number(sides[2])];
  if (width < 1 || height < 1 || width > MOST_SIDE || height > MOST_SIDE) return null;
  const name = `${width}x${height}`;
  const fits =
    Math.round((width * base.height) / base.width) === height ||
    Math.round((height * base.width) / base.height) === width;
  return fits ? { name, extent: [width, height] } : { name, cell: [width, height] };
}

const MOST_SIDE = 16384;

/** A linear map from places on the axis to pixels. */
export interface AxisScale {
  readonly first: number;
  readonly last: number;
  x(lod: number): number;
  lod(x: number): number;
}

/** The axis over `width` pixels, with `margin` left free at both ends; at least two levels are spread out. */
export function axisScale(stops: readonly Placed[], width: number, margin: number): AxisScale {
  const first = Math.min(0, ...stops.map((stop) => stop.lod));
  const last = Math.max(first + 1, ...stops.map((stop) => stop.lod));
  const step = Math.max(1, width - 2 * margin) / (last - first);
  return {
    first,
    last,
    x: (lod) => margin + (lod - first) * step,
    lod: (x) => Math.min(last, Math.max(first, first + (x - margin) / step)),
  };
}

/** The stop within `reach` of a place, the nearest one; null between stops. */
export function stopNear<S extends Placed>(stops: readonly S[], lod: number, reach: number): S | null {
  let best: S | null = null;
  for (const stop of stops) {
    const distance = Math.abs(stop.lod - lod);
    if (distance <= reach && (best === null || distance < Math.abs(best.lod - lod))) best = stop;
  }
  return best;
}
