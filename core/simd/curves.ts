import { type Encoder, srgbEncoder } from '../color/encoder.ts';
import { type Depth, maxCode } from '../raster/raster.ts';
import { CLIP_SLACK } from '../resample/clip.ts';
import type { Encoding, Role } from '../resample/encoding.ts';
import { aligned, type Machine } from './machine.ts';

/** Whether the curves of kernels/encode.ts can store what the encoding asks for. Color that is multiplied by alpha as it is stored,
 *  sRGB codes that are decoded as late as that, and roughness are the plain coder's. */
export function hasCurves({ layout, store, light }: Encoding): boolean {
  if (store === 'premultiplied' && layout.alpha !== null) return false;
  return layout.roles.every((role) => {
    if (role.kind === 'color') return light === 'coded' || role.transfer === role.stored;
    return role.kind !== 'roughness';
  });
}

/** Where counts stand in the curves, as integers of each channel. */
export const BELOW = 144;
export const ABOVE = 160;

/** Writes what kernels/encode.ts draws, and answers its address. */
export function writeCurves(machine: Machine, encoding: Encoding): number {
  const { layout, depth } = encoding;
  const address = machine.take(CURVE_BYTES);
  const encoder = srgbEncoder(depth);
  const table = machine.keep(depth === 8 ? packedTable() : encoder.starts);
  const thresholds = depth === 8 ? 0 : machine.keep(encoder.thresholds);
  const { bytes, floats, integers, addresses } = machine.views;
  bytes.fill(0, address, address + CURVE_BYTES);
  for (let lane = 0; lane < 4; lane++) {
    const role = layout.roles[lane] ?? NO_ROLE;
    const lanes = laneOf(encoding, role);
    const at = (address >> 2) + lane;
    integers[at] = layout.weighted.includes(lane) && layout.alpha !== null ? -1 : 0;
    floats[at + 8] = lanes.below;
    floats[at + 12] = floatAtMost(lanes.above);
    floats[at + 16] = lanes.factor;
    floats[at + 20] = lanes.divisor;
    floats[at + 24] = lanes.least;
    floats[at + 28] = maxCode(depth);
    integers[at + 32] = lanes.coded ? -1 : 0;
    if (lanes.divisor !== 1) integers[(address >> 2) + 47] = 1;
  }
  addresses[(address >> 2) + 4] = (layout.alpha ?? 0) * 4;
  addresses[(address >> 2) + 44] = table;
  addresses[(address >> 2) + 45] = thresholds;
  addresses[(address >> 2) + 46] = encoder.firstBucket;
  return address;
}

/** Bytes that the curves of a depth take. */
export function curveBytes(depth: Depth): number {
  const { starts, thresholds } = srgbEncoder(depth);
  if (depth === 8) return aligned(CURVE_BYTES) + aligned(packedTable().byteLength);
  return aligned(CURVE_BYTES) + aligned(starts.byteLength) + aligned(thresholds.byteLength);
}

const CURVE_BYTES = 192;

/** How one lane is stored. */
interface Lane {
  /** Least and greatest values, scaled, that do not count as clipped. */
  readonly below: number;
  readonly above: number;
  readonly factor: number;
  readonly divisor: number;
  readonly least: number;
  readonly coded: boolean;
}

/** A lane whose codes are nobody's: normals are written over them. */
const NO_ROLE: Role = { kind: 'normal' };

function laneOf({ layout, depth, light }: Encoding, role: Role): Lane {
  const most = maxCode(depth);
  const uncounted = { below: Number.NEGATIVE_INFINITY, above: Number.POSITIVE_INFINITY };
  const linear = { factor: 1, divisor: 1, least: 0, coded: false };
  const counted = { below: -most * CLIP_SLACK, above: most + most * CLIP_SLACK };
  if (role.kind === 'normal' || role.kind === 'roughness') return { ...uncounted, ...linear };
  if (role.kind === 'unused') return { ...uncounted, ...linear, least: most };
  if (role.kind === 'color' && role.transfer === 'srgb') {
    if (light === 'linear') return { ...counted, ...linear, factor: most };
    return { below: -CLIP_SLACK, above: 1 + CLIP_SLACK, ...linear, coded: true };
  }
  const from = maxCode(layout.depth);
  return { ...counted, ...linear, factor: Math.max(1, most / from), divisor: Math.max(1, from / most) };
}

/** The greatest float32 that is not above `value`: a float32 is above one where it is above the other. */
function floatAtMost(value: number): number {
  const float = Float32Array.of(value);
  if (float[0] > value) new Uint32Array(float.buffer)[0]--;
  return float[0];
}

/** The table of 8 bits, as kernels/encode.ts draws it: the bits of the least value, then an entry a bucket. */
function packedTable(): Uint32Array {
  packed ??= pack(srgbEncoder(8));
  return packed;
}

let packed: Uint32Array | null = null;

function pack({ thresholds, firstBucket, shift }: Encoder): Uint32Array {
  const bits = new Uint32Array(thresholds.buffer, thresholds.byteOffset, thresholds.length);
  const last = new Uint32Array(Float32Array.of(1).buffer)[0] >>> shift;
  const table = new Uint32Array(last - firstBucket + 2);
  table[0] = firstBucket << shift;
  let code = 0;
  for (let bucket = firstBucket; bucket <= last; bucket++) {
    const end = (bucket + 1) << shift;
    // Infinity, behind the last threshold, has more bits than any end.
    const next = Math.min(bits[code], end);
    table[bucket - firstBucket + 1] = (code + 1) * 2 ** 24 - next;
    if (bits[code] < end) code++;
    if (bits[code] < end) throw new RangeError(`Expected one threshold at most in bucket ${bucket}`);
  }
  return table;
}
