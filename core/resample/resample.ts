import type { Taps } from '../kernel/taps.ts';
import type { Wrap } from '../kernel/wrap.ts';
import type { Extent } from '../raster/raster.ts';
import type { Engine } from './engine.ts';
import { plainEngine } from './plain.ts';

/** One resample of floats, channels interleaved, as a chain's step does it: x before y, nothing clamped. The result holds
 *  x.to * y.to texels and belongs to the receiver. */
export function resampleFloats(
  source: Float32Array,
  extent: Extent,
  channels: number,
  taps: { readonly x: Taps; readonly y: Taps },
  wrap: { readonly x: Wrap; readonly y: Wrap },
  engine: Engine = plainEngine,
): Float32Array {
  const result = new Float32Array(taps.x.to * taps.y.to * channels);
  const target: Extent = { width: taps.x.to, height: taps.y.to };
  // Nothing is decoded: floats go in as they are.
  const tables = Array.from({ length: channels }, () => new Float32Array(1));
  const decoding = { depth: 8, channels, tables, alpha: null, weighted: [], normals: [] } as const;
  const steps = [{ from: 0, extent: target, ...taps }];
  const run = engine.open({ extent, wrap, decoding, steps }, (node, y, floats) => {
    if (node === 1) result.set(floats, y * target.width * channels);
  });
  const length = extent.width * channels;
  for (let y = 0; y < extent.height; y++) run.pushFloats(source.subarray(y * length, (y + 1) * length));
  return result;
}
