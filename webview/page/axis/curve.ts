import { svg } from 'lit';
import type { AxisScale } from '../state/scale.ts';

/** One thing that is followed along the axis. */
export interface Curve {
  readonly name: string;
  /** Values by level; a level without a value is missing. */
  readonly points: readonly { readonly lod: number; readonly value: number }[];
  /** Least range of values that is drawn, so that a flat curve looks flat. */
  readonly low: number;
  readonly high: number;
  /** Values beyond these are marked. */
  readonly floor: number | null;
  readonly ceiling: number | null;
  format(value: number): string;
}

/** Whether a value is beyond the curve's limits. */
export function isBeyond(curve: Curve, value: number): boolean {
  return (curve.ceiling !== null && value > curve.ceiling) || (curve.floor !== null && value < curve.floor);
}

/** A polyline with its limits dashed, in a band `height` high from `top`. Points beyond a limit are triangles, the rest dots. */
export function drawCurve(curve: Curve, scale: AxisScale, top: number, height: number) {
  const values = [...curve.points.map(({ value }) => value), curve.low, curve.high];
  const limits = [curve.floor, curve.ceiling].filter((limit) => limit !== null);
  const low = Math.min(...values, ...limits);
  const high = Math.max(...values, ...limits);
  const y = (value: number): number => top + 3 + (height - 6) * (1 - (value - low) / (high - low || 1));
  const path = curve.points.map(({ lod, value }) => `${scale.x(lod).toFixed(1)},${y(value).toFixed(1)}`).join(' ');
  return svg`
    ${limits.map(
      (limit) =>
        svg`<line class="limit" x1=${scale.x(scale.first)} x2=${scale.x(scale.last)} y1=${y(limit)} y2=${y(limit)}></line>`,
    )}
    <polyline class="curve" points=${path}></polyline>
    ${curve.points.map(({ lod, value }) => {
      const [cx, cy] = [scale.x(lod), y(value)];
      return isBeyond(curve, value)
        ? svg`<path class="beyond" d=${`M${cx} ${cy - 4}l4 7h-8z`}></path>`
        : svg`<circle class="point" cx=${cx} cy=${cy} r="1.5"></circle>`;
    })}
  `;
}
