import { type Depth, maxCode } from '../raster/raster.ts';
import { decodeSrgb } from './transfer.ts';

/** Finds the sRGB code of linear light, exactly: the code is the number of thresholds that the value reaches, where
 *  threshold c is the linear light half-way (in code space) between codes c and c + 1. */
export class Encoder {
  readonly depth: Depth;
  /** Ascending; thresholds[c] is the least float32 whose code is above c. One Infinity behind the last. */
  readonly thresholds: Float32Array;
  /** By the top bits of a float32, from those of the lowest threshold on: the code of the bucket's least value. */
  readonly starts: Uint16Array;
  /** A value's bucket is (its bits >>> shift) - firstBucket. */
  readonly shift: number;
  readonly firstBucket: number;
  readonly #max: number;
  readonly #float = new Float32Array(1);
  readonly #bits = new Uint32Array(this.#float.buffer);

  constructor(depth: Depth) {
    this.depth = depth;
    this.#max = maxCode(depth);
    const thresholds = encodeThresholds(depth);
    this.thresholds = new Float32Array(this.#max + 1).fill(Number.POSITIVE_INFINITY);
    this.thresholds.set(thresholds);
    this.shift = SHIFTS[depth];
    this.firstBucket = this.#bitsOf(thresholds[0]) >>> this.shift;
    this.starts = this.#bucketStarts();
  }

  /** The code of a linear value: 0 for what is below the first threshold or is no number, the largest for what is at or
   *  above 1. The value is rounded to float32 first. */
  codeOf(value: number): number {
    this.#float[0] = value;
    const rounded = this.#float[0];
    if (!(rounded >= this.thresholds[0])) return 0;
    if (rounded >= 1) return this.#max;
    let code = this.starts[(this.#bits[0] >>> this.shift) - this.firstBucket];
    while (rounded >= this.thresholds[code]) code++;
    return code;
  }

  #bucketStarts(): Uint16Array {
    const end = (this.#bitsOf(1) >>> this.shift) - this.firstBucket;
    const starts = new Uint16Array(end);
    let code = 0;
    for (let bucket = 0; bucket < end; bucket++) {
      this.#bits[0] = (bucket + this.firstBucket) << this.shift;
      while (this.#float[0] >= this.thresholds[code]) code++;
      starts[bucket] = code;
    }
    return starts;
  }

  #bitsOf(value: number): number {
    this.#float[0] = value;
    return this.#bits[0];
  }
}

/** Buckets are 2^-7 of a value wide at 8 bits, where at most one threshold falls into each, and 2^-13 at 16 bits, where at
 *  most five do; the tables hold 2.5 KB and 336 KB. */
const SHIFTS = { 8: 16, 16: 10 } as const;

/** The encoder of a depth, made once. */
export function srgbEncoder(depth: Depth): Encoder {
  encoders[depth] ??= new Encoder(depth);
  return encoders[depth];
}

const encoders: { 8?: Encoder; 16?: Encoder } = {};

/** threshold c = the least float32 at or above decode((c + 1/2) / max), for c = 0..max-1. */
export function encodeThresholds(depth: Depth): Float32Array {
  const max = maxCode(depth);
  return Float32Array.from({ length: max }, (_, c) => leastFloatFrom(decodeSrgb((c + 0.5) / max)));
}

/** The code of a value in code units, clamped to 0..max and rounded half to even; 0 for what is no number.
 *  [IEEE754, roundTiesToEven] */
export function roundedCode(value: number, max: 255 | 65535): number {
  if (!(value > 0)) return 0;
  return value >= max ? max : roundHalfEven(value);
}

/** Nearest integer, halves to the even one, for |x| < 2^51: there 1.5 * 2^52 + x has no fraction bits left, so the addition
 *  itself rounds. */
export function roundHalfEven(x: number): number {
  return x + 6755399441055744 - 6755399441055744;
}

/** `value` is positive. */
function leastFloatFrom(value: number): number {
  const float = Float32Array.of(value);
  if (float[0] < value) new Uint32Array(float.buffer)[0]++;
  return float[0];
}
