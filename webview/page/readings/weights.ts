import type { AxisFootprint } from '../../../core/proof/want.ts';
import { csvText } from './csv.ts';

/** Weights of a footprint, an axis after the other: a row for each source texel. */
export function weightsCsv({ x, y }: { readonly x: AxisFootprint; readonly y: AxisFootprint }): string {
  const rows = (axis: 'x' | 'y', { texels, weights }: AxisFootprint) =>
    texels.map((texel, i) => [axis, texel, Number(weights[i].toFixed(7))]);
  return csvText([['axis', 'texel', 'weight'], ...rows('x', x), ...rows('y', y)]);
}
