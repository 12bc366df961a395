import type { Clipped } from '../chain/clip.ts';
import type { Encoding } from '../chain/encode.ts';
import type { LightSum } from '../chain/image.ts';
import { frontChannels, holdsColor } from '../chain/layout.ts';
import { LUMINANCE_BLUE, LUMINANCE_GREEN, LUMINANCE_RED } from '../color/luminance.ts';
import { decodeTable } from '../color/transfer.ts';
import { type Codes, maxCode } from '../raster/raster.ts';
import { SHORTEST } from '../resample/decode.ts';
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
  readonly #colors: number;
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
    this.#colors = holdsColor(encoding.layout) ? writeColors(machine, encoding) : 0;
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

  light(floats: Float32Array): LightSum {
    const { kernels, views } = this.#machine;
    const { layout, depth } = this.#encoding;
    const alpha = layout.alpha === null ? -1 : layout.alpha * 4;
    const step = (layout.channels * depth) / 8;
    const most = maxCode(layout.depth);
    const texels = this.#texels(floats);
    const row = floats.byteOffset;
    const lightOf = depth === 8 ? kernels.lightOfBytes : kernels.lightOfWords;
    lightOf(this.#codes, step, this.#colors, row, this.#stride, alpha, most, texels, this.#sums);
    const at = this.#sums >> 3;
    return { light: views.doubles[at], weight: views.doubles[at + 1] };
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
  const colors = holdsColor(encoding.layout) ? colorBytes(encoding) : 0;
  const rows = aligned(codeBytes(encoding, texels)) + aligned(texels * 4);
  return rows + aligned(SUM_BYTES) + curveBytes(encoding.depth) + colors;
}

/** Light and weight of a row. */
const SUM_BYTES = 16;

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

/** Bytes of what kernels/measure.ts asks of red, green and blue. */
const COLOR_BYTES = 48;

function writeColors(machine: Machine, encoding: Encoding): number {
  const colors = machine.take(COLOR_BYTES);
  SHARES.forEach((share, index) => {
    const channel = frontChannels(encoding.layout.channels) === 1 ? 0 : index;
    const table = machine.keep(colorTable(encoding, channel, share));
    const { addresses } = machine.views;
    addresses[(colors >> 2) + index * 4] = (channel * encoding.depth) / 8;
    addresses[(colors >> 2) + index * 4 + 1] = table;
  });
  return colors;
}

function colorBytes({ depth }: Encoding): number {
  return aligned(COLOR_BYTES) + SHARES.length * aligned((maxCode(depth) + 1) * 8);
}

const SHARES = [LUMINANCE_RED, LUMINANCE_GREEN, LUMINANCE_BLUE] as const;

/** Light of each code, 0..1, times a share of luminance. */
function colorTable({ layout, light, depth }: Encoding, channel: number, share: number): Float64Array {
  const role = layout.roles[channel];
  const isCoded = light === 'coded' && role.kind === 'color' && role.stored === 'srgb';
  const transfer = isCoded ? 'srgb' : 'linear';
  const whole = isCoded ? 1 : maxCode(depth);
  return madeTable(`${share} ${transfer} ${depth}`, decodeTable(depth, transfer), share, whole);
}

/** Tables are made once: those of 16 bits take longer than a small chain. */
function madeTable(key: string, values: Float32Array, share: number, whole: number): Float64Array {
  let table = tables.get(key);
  if (table === undefined) {
    table = new Float64Array(values.length);
    for (let code = 0; code < table.length; code++) table[code] = share * (values[code] / whole);
    tables.set(key, table);
  }
  return table;
}

const tables = new Map<string, Float64Array>();
