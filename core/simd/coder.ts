import { measureRow } from '../chain/coder.ts';
import { isLightInFloats, wholeOf } from '../chain/light.ts';
import { type Codes, maxCode } from '../raster/raster.ts';
import type { Clipped } from '../resample/clip.ts';
import { SHORTEST } from '../resample/decode.ts';
import type { Encoding } from '../resample/encoding.ts';
import type { RowCoder } from '../resample/engine.ts';
import { ABOVE, BELOW, curveBytes, hasCurves, writeCurves } from './curves.ts';
import { aligned, type Machine } from './machine.ts';

/** Whether a machine can store rows of the encoding. */
export const takesEncoding = hasCurves;

/** Stores and measures rows that lie in the machine's memory, as the plain coder does it. */
export class SimdCoder implements RowCoder {
  readonly #machine: Machine;
  readonly #encoding: Encoding;
  readonly #stride: number;
  readonly #curves: number;
  readonly #quads: boolean;
  readonly #codes: number;
  readonly #plane: number;
  readonly #wholes: number;
  /** Whether float rows hold light. */
  readonly #measures: boolean;
  readonly #sums: number;
  readonly #views = new Map<number, Codes>();

  /** `texels` is the length of the longest row. */
  constructor(machine: Machine, encoding: Encoding, texels: number) {
    this.#machine = machine;
    this.#encoding = encoding;
    this.#stride = encoding.floatChannels * 4;
    this.#codes = machine.take(codeBytes(encoding, texels));
    this.#plane = machine.take(texels * 4);
    this.#sums = machine.take(SUM_BYTES);
    this.#curves = writeCurves(machine, encoding);
    this.#wholes = writeWholes(machine, encoding);
    this.#measures = isLightInFloats(encoding.layout);
    this.#quads = takesQuads(encoding);
  }

  encode(floats: Float32Array, codes: Codes, offset: number, clipped: Clipped): void {
    const { kernels } = this.#machine;
    const { layout, depth } = this.#encoding;
    const { channels } = layout;
    const row = floats.byteOffset;
    const texels = this.#texels(floats);
    if (this.#quads) kernels.encodeQuads(row, texels, this.#codes, this.#curves);
    else if (depth === 8) kernels.encodeBytes(row, this.#stride, texels, this.#codes, channels, this.#curves);
    else kernels.encodeWords(row, this.#stride, texels, this.#codes, channels, this.#curves);
    const most = maxCode(depth);
    for (const { x, y, z } of layout.normals) {
      kernels.encodeNormals(row, this.#stride, texels, this.#codes, channels, x, y, z, SHORTEST, most);
    }
    codes.set(this.#row(texels * channels), offset);
    this.#count(clipped);
  }

  measure(floats: Float32Array, codes: Codes, offset: number, sums: Float64Array, at: number): void {
    if (!this.#measures) {
      measureRow(this.#encoding, floats, codes, offset, sums, at);
      return;
    }
    const { kernels, views } = this.#machine;
    const { layout } = this.#encoding;
    const alpha = layout.alpha === null ? -1 : layout.alpha * 4;
    const texels = this.#texels(floats);
    kernels.sumHeld(floats.byteOffset, this.#stride, alpha, maxCode(layout.depth), this.#wholes, texels, this.#sums);
    const from = this.#sums >> 3;
    for (let channel = 0; channel < layout.channels; channel++) sums[at + channel] = views.doubles[from + channel];
  }

  keepAlpha(floats: Float32Array, values: Uint16Array): void {
    const { kernels, views } = this.#machine;
    const { layout } = this.#encoding;
    const alpha = floats.byteOffset + layout.alpha! * 4;
    kernels.keepAlpha(alpha, this.#stride, maxCode(layout.depth), this.#plane, values.length);
    values.set(views.words.subarray(this.#plane >> 1, (this.#plane >> 1) + values.length));
  }

  measureLengths(floats: Float32Array, lengths: Float32Array): void {
    const { kernels, views } = this.#machine;
    const { layout } = this.#encoding;
    const [{ x, y, z }] = layout.normals;
    const alpha = layout.alpha !== null && layout.weighted.includes(x) ? layout.alpha * 4 : -1;
    const row = floats.byteOffset;
    kernels.measureLengths(row, this.#stride, x * 4, y * 4, z * 4, alpha, this.#plane, lengths.length);
    lengths.set(views.floats.subarray(this.#plane >> 2, (this.#plane >> 2) + lengths.length));
  }

  /** The codes of a row that has just been stored. Views are made once a length, not once a row. */
  #row(length: number): Codes {
    let row = this.#views.get(length);
    if (row === undefined) {
      const { bytes, words } = this.#machine.views;
      const is8 = this.#encoding.depth === 8;
      const from = is8 ? this.#codes : this.#codes >> 1;
      row = (is8 ? bytes : words).subarray(from, from + length);
      this.#views.set(length, row);
    }
    return row;
  }

  #texels(floats: Float32Array): number {
    return floats.length / this.#encoding.floatChannels;
  }

  /** Hands the counts over and begins anew. */
  #count({ below, above }: Clipped): void {
    const { integers } = this.#machine.views;
    const curves = this.#curves >> 2;
    let any = 0;
    for (let at = BELOW / 4; at < ABOVE / 4 + 4; at++) any |= integers[curves + at];
    if (any === 0) return;
    for (let channel = 0; channel < below.length; channel++) {
      below[channel] += integers[curves + BELOW / 4 + channel];
      above[channel] += integers[curves + ABOVE / 4 + channel];
    }
    integers.fill(0, curves + BELOW / 4, curves + ABOVE / 4 + 4);
  }
}

/** Bytes that a coder takes. */
export function coderBytes(encoding: Encoding, texels: number): number {
  const rows = aligned(codeBytes(encoding, texels)) + aligned(texels * 4);
  return rows + aligned(SUM_BYTES) + curveBytes(encoding.depth) + aligned(16);
}

/** Four lanes of a row. */
const SUM_BYTES = 32;

/** Three codes more are written behind a row. */
function codeBytes({ layout, depth }: Encoding, texels: number): number {
  return (texels * layout.channels + 3) * (depth / 8);
}

/** RGBA of 8 bits, coded color that alpha weighs: what nearly every texture is. */
function takesQuads({ layout, depth, light }: Encoding): boolean {
  if (depth !== 8 || layout.depth !== 8 || light !== 'coded' || layout.alpha !== 3) return false;
  return [0, 1, 2].every((channel) => {
    const role = layout.roles[channel];
    return role.kind === 'color' && role.transfer === 'srgb' && layout.weighted.includes(channel);
  });
}

/** What full light is in each lane, a float. Alpha bounds itself. */
function writeWholes(machine: Machine, { layout }: Encoding): number {
  const wholes = layout.roles.map((_, channel) => (channel === layout.alpha ? 1 : wholeOf(layout, channel)));
  return machine.keep(Float32Array.of(...wholes, 1, 1, 1, 1).subarray(0, 4));
}
