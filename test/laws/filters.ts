import { magnifySlopes } from '../../core/chain/magnify.ts';
import { methodOf } from '../../core/chain/method.ts';
import type { ChannelCount, Extent } from '../../core/raster/raster.ts';
import { plainEngine } from '../../core/resample/plain.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { picture } from '../fixtures/picture.ts';
import { treatment } from '../fixtures/treatment.ts';
import { type Doubles, doubles } from '../reference/doubles.ts';
import { resampleDoubles } from '../reference/resample.ts';

/** One resample of floats, by the engine or by the reference: both must keep the laws. */
export interface Filter {
  readonly name: string;
  filter(image: Doubles, extent: Extent, kernels: Treatment['kernel'], wrap: Treatment['wrap']): Doubles;
  /** Rounding of one operation relative to its result: half a unit in the last place. */
  readonly rounding: number;
}

const reference: Filter = { name: 'reference', filter: resampleDoubles, rounding: 2 ** -53 };

export const engineFilter: Filter = { name: 'engine', filter: resampleByEngine, rounding: 2 ** -24 };

export const filters: readonly Filter[] = [reference, engineFilter];

/** The engine takes codes: each texel's code is its own index, and a table per channel holds the values. */
function resampleByEngine(
  image: Doubles,
  extent: Extent,
  kernels: Treatment['kernel'],
  wrap: Treatment['wrap'],
): Doubles {
  const { width, height, channels } = image;
  const texels = width * height;
  const codes = Uint16Array.from({ length: texels * channels }, (_, i) => Math.floor(i / channels));
  const tables = Array.from({ length: channels }, (_, c) =>
    Float32Array.from({ length: texels }, (_, texel) => image.values[texel * channels + c]),
  );
  const decoding = { depth: 16, channels, tables, weighted: [], alpha: null, normals: [] } as const;
  const method = methodOf(image, extent, treatment({ kernel: kernels, wrap }), 'the result');
  const result = doubles(extent.width, extent.height, channels);
  const take = (y: number, row: Float32Array): void => result.values.set(row, y * extent.width * channels);
  if (method.kind === 'slopes') {
    const raster = picture({ width, height }, channels as ChannelCount, 16, codes);
    magnifySlopes(raster, extent, decoding, wrap, take);
    return result;
  }
  if (method.kind !== 'rows' && method.kind !== 'codes')
    throw new RangeError(`Expected rows but received ${method.kind}`);
  const steps = [{ from: 0, extent, x: method.x, y: method.y }];
  const run = plainEngine.open({ extent: image, wrap, decoding, steps }, (node, y, row) => {
    if (node === 1) take(y, row);
  });
  for (let y = 0; y < height; y++) run.push(codes.subarray(y * width * channels, (y + 1) * width * channels));
  return result;
}

/** Error that one resample of values within -1..1 may gather. Each pass adds its taps one by one: as many roundings of
 *  sums below 2 (the taps' absolute sum is below 2 for every kernel), as many of the products, and as many of the taps
 *  themselves, which the engine holds as multiples of 2^-24. */
export function gathered(filter: Filter, taps: number): number {
  return 2 * 3 * 2 * taps * filter.rounding;
}

/** Taps of a pass at most: the widest kernel reaches 4 texels of the coarser grid to each side. */
export function mostTaps(from: number, to: number): number {
  return Math.ceil(8 * Math.max(1, from / to)) + 2;
}
