import { svg } from 'lit';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import type { Stop } from './scale.ts';

export const THUMB_TOP = 18;
export const THUMB_HEIGHT = 74;
export const CURVE_HEIGHT = 22;

/** Where the rows of the axis lie, in CSS pixels from its top. */
export interface Rows {
  readonly level: number;
  /** 0 where there are none. */
  readonly targets: number;
  /** 0 where there are no distances. */
  readonly meters: number;
  readonly curves: number;
  readonly height: number;
}

export function rowsOf(has: { readonly curves: number; readonly targets: boolean; readonly distances: boolean }): Rows {
  const level = THUMB_TOP + THUMB_HEIGHT + 16;
  const targets = level + 18;
  const below = targets + (has.targets ? 16 : 0);
  const curves = below + (has.distances ? 16 : 0) + (has.curves > 0 ? 4 : 0);
  return {
    level,
    targets: has.targets ? targets : 0,
    meters: has.distances ? below : 0,
    curves,
    height: curves + has.curves * CURVE_HEIGHT + 4,
  };
}

/** A pointer on the rail and a line through the curves; thumbs and numbers stay free of it. */
export function drawSight(x: number, rows: Rows) {
  const rail = rows.level - 4;
  return svg`<g class="sight">
    <line x1=${x} x2=${x} y1=${rows.curves - 2} y2=${rows.height}></line>
    <path d=${`M${x - 6} ${rail - 10}h12l-6 9z`}></path>
  </g>`;
}

/** The longer side where there is little room, both where sides differ and there is more. */
export function sizeText({ extent }: Stop, spacing: number): string {
  const { width, height } = extent;
  return width === height || spacing < 64 ? String(Math.max(width, height)) : `${width}×${height}`;
}

/** Stops closer than this share a place: of one size but for rounding. */
export const SAME_PLACE = 0.02;

export function isFirstAt(stops: readonly Stop[], stop: Stop): boolean {
  return (
    stops.find((each) => Math.abs(each.lod - stop.lod) <= SAME_PLACE && each.kind !== 'level') === stop ||
    stop.kind === 'level'
  );
}

/** Names of all targets at one place. */
export function labelsAt(stops: readonly Stop[], stop: Stop): string {
  const here = stops.filter((each) => each.kind !== 'level' && Math.abs(each.lod - stop.lod) <= SAME_PLACE);
  return here.map(({ label }) => label).join(' · ');
}

/** Whether the build writes this image; other levels are there to be looked at. */
export function isShipped({ levels }: Treatment, { image }: Stop): boolean {
  if (!('level' in image)) return true;
  return levels !== 'none' && image.level >= levels.first && image.level <= (levels.last ?? image.level);
}
