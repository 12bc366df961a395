import { expect, it } from 'vitest';
import { headOf } from '../../core/chain/chain.ts';
import { plainCoder } from '../../core/chain/coder.ts';
import { SUMS_A_ROW } from '../../core/chain/light.ts';
import { type ChainPlan, passOf, planChain } from '../../core/chain/plan.ts';
import { encodeThresholds } from '../../core/color/encoder.ts';
import { type ChannelCount, type Depth, maxCode, newCodes } from '../../core/raster/raster.ts';
import { CLIP_SLACK, newClipped } from '../../core/resample/clip.ts';
import type { RowCoder } from '../../core/resample/engine.ts';
import { noiseRaster, numbers } from '../fixtures/noise.ts';
import { simdEngine } from '../fixtures/simd.ts';
import { treatment } from '../fixtures/treatment.ts';
import { hash } from './passes.ts';

// Floats that decide: both sides of every threshold and of every tie, what lies just outside, and alphas that are hardly there.

interface Case {
  readonly channels: ChannelCount;
  readonly from: Depth;
  readonly to: Depth;
  readonly content: 'color' | 'data' | 'normal';
}

const cases = ([1, 2, 3, 4] as const).flatMap((channels) =>
  ([8, 16] as const).flatMap((from) =>
    ([8, 16] as const).flatMap((to) =>
      (['color', 'data', 'normal'] as const).map((content): Case => ({ channels, from, to, content })),
    ),
  ),
);

const simd = simdEngine();

it.each(cases.filter((one) => one.content !== 'normal' || one.channels > 1))(
  'stores $content of $channels channels and $from bits in $to bits as the plain coder does',
  (one) => {
    const plan = planChain(headOf(noiseRaster(1, EXTENT, one.channels, one.from, 'few')), treatmentOf(one));
    const rows = hardRows(one, plan);
    expect(stored(plan, rows, null)).toEqual(stored(plan, rows, 'own'));
  },
);

const EXTENT = { width: 253, height: 1 };

function treatmentOf({ content, to }: Case) {
  return treatment({ content, depth: to, alpha: { use: content === 'data' ? 'data' : 'opacity' } });
}

/** All that a coder makes of rows. */
function stored(plan: ChainPlan, rows: readonly Float32Array[], use: 'own' | null) {
  const pass = { ...passOf(plan).pass, extent: { width: EXTENT.width, height: rows.length }, steps: [] };
  const { layout } = pass.encoding!;
  const length = EXTENT.width * layout.channels;
  const codes = newCodes(plan.depth, length * rows.length);
  const clipped = newClipped(layout.channels);
  const lengths = rows.map(() => new Float32Array(EXTENT.width));
  const alphas = rows.map(() => new Uint16Array(EXTENT.width));
  const lights = new Float64Array(rows.length * SUMS_A_ROW);
  const run = simd.open(pass, (_, y, floats) => {
    if (layout.normals.length > 0) coder.measureLengths(floats, lengths[y]);
    coder.encode(floats, codes, y * length, clipped, lengths[y]);
    if (layout.alpha !== null) coder.keepAlpha(floats, alphas[y]);
    if (plan.treatment.content === 'color') coder.measure(floats, codes, y * length, lights, y * SUMS_A_ROW);
  });
  if (run.coder === null) throw new TypeError('Expected an engine with a coder of its own');
  const coder: RowCoder = use === 'own' ? run.coder : plainCoder(pass.encoding!);
  for (const row of rows) run.pushFloats(row);
  return { codes: hash(codes), clipped, lengths: lengths.map(hash), alphas: alphas.map(hash), lights: [...lights] };
}

/** Rows of texels of which each channel has one value of those that decide, as it is or times the texel's alpha. */
function hardRows({ from, to, content }: Case, plan: ChainPlan): Float32Array[] {
  const { layout } = plan;
  const { floatChannels } = passOf(plan).pass.encoding!;
  const next = numbers(7);
  const whole = content === 'color' ? 1 : content === 'normal' ? 1 : maxCode(from);
  const edges = content === 'color' ? [...encodeThresholds(to)] : ties(whole, maxCode(to));
  const outer = [0, -0, whole, -whole, 2 * whole, 1e30, -1e30, 1e-30, whole * (1 + CLIP_SLACK), -whole * CLIP_SLACK];
  const values = [...edges, ...outer].flatMap(neighbors);
  const alphas = [0, -0, 1, 2, 128, -1, 1e-30, 1e30, maxCode(from), maxCode(from) / 3].flatMap(neighbors);
  // Every value once in every channel, and as many texels as fill whole rows.
  const texels = Math.ceil(Math.min(values.length, MOST_VALUES) / EXTENT.width) * EXTENT.width;
  const step = Math.max(1, Math.floor(values.length / texels));
  return Array.from({ length: texels / EXTENT.width }, (_, y) => {
    const row = new Float32Array(EXTENT.width * floatChannels);
    for (let x = 0; x < EXTENT.width; x++) {
      const alpha = next() % 3 === 0 ? alphas[next() % alphas.length] : 2 ** (next() % 8);
      for (let channel = 0; channel < floatChannels; channel++) {
        const value = values[((y * EXTENT.width + x) * step + channel * 7) % values.length];
        // Filters leave color where alpha is 0, and alpha where color is.
        const weight = layout.weighted.includes(channel) && next() % 4 > 0 ? alpha : 1;
        row[x * floatChannels + channel] = channel === layout.alpha ? alpha : value * weight;
      }
    }
    return row;
  });
}

/** 16 bits have 200 000 values; every sixteenth will do. */
const MOST_VALUES = 12_000;

/** Half-way between codes, in the unit in which `whole` is the largest. */
function ties(whole: number, most: number): number[] {
  return Array.from({ length: most }, (_, code) => ((code + 0.5) / most) * whole);
}

/** A float32 and those on either side of it. */
function neighbors(value: number): number[] {
  const bits = new Uint32Array(Float32Array.of(value).buffer)[0];
  const near = Float32Array.of(value, value, value);
  const all = new Uint32Array(near.buffer);
  all[0] = bits + 1;
  // The numbers next to a zero are the least of either sign.
  all[2] = value === 0 ? 0x80000001 : bits - 1;
  return [...near];
}
