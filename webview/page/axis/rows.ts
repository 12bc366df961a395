import { svg } from 'lit';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import type { Placed, Stop } from '../state/scale.ts';

/** Height of the thumbs, in CSS pixels. */
export const THUMB_HEIGHT = 74;

/** Where the rows of the axis lie, in CSS pixels from its top. */
export interface Rows {
  /** Baseline of a text in a row, from the row's top. */
  readonly baseline: number;
  readonly thumbs: number;
  readonly level: number;
  /** 0 where there are none. */
  readonly targets: number;
  /** 0 where there are no distances. */
  readonly meters: number;
  readonly curves: number;
  /** Height of one curve, and how far below its top it is drawn: its name stands above it where there is no room beside it. */
  readonly curve: number;
  readonly curveTop: number;
  readonly height: number;
}

/** `scale` is that of the text. */
export function rowsOf(
  has: {
    readonly curves: number;
    readonly targets: boolean;
    readonly distances: boolean;
    readonly names: 'beside' | 'above';
  },
  scale: number,
): Rows {
  const line = 16 * scale;
  const thumbs = line + 2;
  const level = thumbs + THUMB_HEIGHT + 14;
  const targets = level + line + 2;
  const below = targets + (has.targets ? line : 0);
  const curves = below + (has.distances ? line : 0) + (has.curves > 0 ? 4 : 0);
  const curveTop = has.names === 'above' ? line : 0;
  const curve = 22 * scale + curveTop;
  return {
    baseline: 12 * scale,
    thumbs,
    curve,
    curveTop,
    level,
    targets: has.targets ? targets : 0,
    meters: has.distances ? below : 0,
    curves,
    height: curves + has.curves * curve + 4,
  };
}

/** A pointer on the rail and a line through each curve; thumbs, numbers and names stay free of it. */
export function drawSight(x: number, rows: Rows, curves: number) {
  const rail = rows.level - 4;
  const tops = Array.from({ length: curves }, (_, i) => rows.curves + i * rows.curve + rows.curveTop);
  return svg`<g class="sight">
    ${tops.map((top) => svg`<line x1=${x} x2=${x} y1=${top - 1} y2=${top + rows.curve - rows.curveTop}></line>`)}
    <path d=${`M${x - 6} ${rail - 10}h12l-6 9z`}></path>
  </g>`;
}

/** The longer side where there is little room, both where sides differ and there is more. */
export function sizeText({ extent }: Placed, spacing: number, scale: number): string {
  const { width, height } = extent;
  return width === height || spacing < 64 * scale ? String(Math.max(width, height)) : `${width}×${height}`;
}

/** Stops closer than this share a place: of one size but for rounding. */
export const SAME_PLACE = 0.02;

export function isFirstAt(stops: readonly Placed[], stop: Placed): boolean {
  return (
    stops.find((each) => Math.abs(each.lod - stop.lod) <= SAME_PLACE && each.kind !== 'level') === stop ||
    stop.kind === 'level'
  );
}

/** Names of all targets at one place. */
export function labelsAt(stops: readonly Placed[], stop: Placed): string {
  const here = stops.filter((each) => each.kind !== 'level' && Math.abs(each.lod - stop.lod) <= SAME_PLACE);
  return here.map(({ label }) => label).join(' · ');
}

/** Whether the build writes this image; other levels are there to be looked at. */
export function isShipped({ levels }: Treatment, { image }: Stop): boolean {
  if (!('level' in image)) return true;
  return levels !== 'none' && image.level >= levels.first && image.level <= (levels.last ?? image.level);
}
