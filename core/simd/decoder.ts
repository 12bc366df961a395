import type { Codes } from '../raster/raster.ts';
import { floatChannels, SHORTEST } from '../resample/decode.ts';
import type { Decoding } from '../resample/engine.ts';
import { aligned, FIRST_ADDRESS, type Machine } from './machine.ts';

/** Codes of one row to floats, as decode.ts does it. The first that takes of a machine. */
export class Decoder {
  /** Sums of each float channel over all rows so far. */
  readonly sums: Float64Array;
  readonly #machine: Machine;
  readonly #decoding: Decoding;
  readonly #stride: number;
  readonly #codes: number;
  /** Address of the sums of the row that is being decoded: doubles. */
  readonly #row: number;
  readonly #tables: readonly number[];
  readonly #quads: boolean;

  constructor(machine: Machine, decoding: Decoding, texels: number) {
    this.#machine = machine;
    this.#decoding = decoding;
    this.#stride = floatChannels(decoding) * 4;
    this.#quads = takesQuads(decoding);
    if (this.#quads) writeQuads(machine, decoding);
    this.sums = new Float64Array(floatChannels(decoding));
    this.#codes = machine.take(codeBytes(decoding, texels));
    this.#row = machine.take(SUM_BYTES);
    machine.views.bytes.fill(0, this.#row, this.#row + SUM_BYTES);
    const kept = new Map<Float32Array, number>();
    if (!this.#quads) for (const table of decoding.tables) kept.set(table, kept.get(table) ?? machine.keep(table));
    this.#tables = decoding.tables.map((table) => kept.get(table) ?? 0);
  }

  /** Takes the codes of the next row. */
  take(codes: Codes): void {
    const { views } = this.#machine;
    if (this.#decoding.depth === 8) views.bytes.set(codes, this.#codes);
    else views.words.set(codes, this.#codes >> 1);
  }

  /** Writes texels `from` (a multiple of 4) to `to` of the float row at address `row`. A row's parts come from the left. */
  decode(row: number, from: number, to: number): void {
    const { channels, depth } = this.#decoding;
    const codes = this.#codes + (from * channels * depth) / 8;
    const place = row + from * this.#stride;
    if (this.#quads) {
      this.#machine.kernels.decodeQuads(codes, place, to - from, this.#row);
      return;
    }
    this.#look(codes, place, to - from);
    this.#weigh(place, to - from);
    this.sum(place, to - from);
  }

  /** Sums texels at address `row`. */
  sum(row: number, texels: number): void {
    for (let channel = 0; channel * 4 < this.#stride; channel += 4) {
      this.#machine.kernels.sumRow(row + channel * 4, this.#stride, texels, this.#row + channel * 8);
    }
  }

  /** All of the row is there. */
  endRow(): void {
    const { doubles } = this.#machine.views;
    const at = this.#row >> 3;
    for (let channel = 0; channel < this.sums.length; channel++) this.sums[channel] += doubles[at + channel];
    for (let i = 0; i < SUM_BYTES / 8; i++) doubles[at + i] = 0;
  }

  #look(codes: number, row: number, texels: number): void {
    const { kernels } = this.#machine;
    const { channels, depth, normals } = this.#decoding;
    const look = depth === 8 ? kernels.decodeBytes : kernels.decodeWords;
    const size = depth / 8;
    for (let channel = 0; channel < channels; channel++) {
      const place = row + channel * 4;
      look(codes + channel * size, channels * size, this.#tables[channel], place, this.#stride, texels);
    }
    for (const { x, y, z, rebuilt } of normals) {
      const [px, py, pz] = [x, y, z].map((channel) => row + channel * 4);
      kernels.makeUnit(px, py, pz, rebuilt ? 1 : 0, SHORTEST, this.#stride, texels);
    }
  }

  #weigh(row: number, texels: number): void {
    const { weighted, alpha } = this.#decoding;
    if (alpha === null) return;
    for (const channel of weighted) {
      this.#machine.kernels.weigh(row + channel * 4, row + alpha * 4, this.#stride, texels);
    }
  }
}

/** Bytes that a decoder takes. */
export function decoderBytes(decoding: Decoding, texels: number): number {
  const tables = new Set(decoding.tables);
  const looked = takesQuads(decoding)
    ? 4 * QUAD_BYTES
    : Array.from(tables).reduce((sum, table) => sum + aligned(table.byteLength), 0);
  return aligned(codeBytes(decoding, texels)) + aligned(SUM_BYTES) + looked;
}

function codeBytes({ channels, depth }: Decoding, texels: number): number {
  return (texels * channels * depth) / 8;
}

/** Eight channels: two calls of four. */
const SUM_BYTES = 64;

/** One vector of floats for each of 256 codes. */
const QUAD_BYTES = 4096;

function takesQuads({ depth, channels, normals, alpha, weighted }: Decoding): boolean {
  if (depth !== 8 || channels !== 4 || normals.length > 0) return false;
  return (alpha === null || alpha === 3) && !weighted.includes(3);
}

/** Drawn in kernels/decode.ts, at the address that stands there. */
function writeQuads(machine: Machine, { tables, weighted, alpha }: Decoding): void {
  const address = machine.take(4 * QUAD_BYTES);
  if (address !== FIRST_ADDRESS) throw new RangeError(`Expected a machine of which nothing is taken, not ${address}`);
  const quads = machine.views.floats.subarray(address / 4, (address + 4 * QUAD_BYTES) / 4);
  quads.fill(0);
  for (let code = 0; code < 256; code++) {
    for (let channel = 0; channel < 3; channel++) {
      quads[channel * 1024 + code * 4 + channel] = tables[channel][code] ?? 0;
      quads[3072 + code * 4 + channel] = alpha !== null && weighted.includes(channel) ? (tables[3][code] ?? 0) : 1;
    }
    quads[2048 + code * 4 + 3] = 1;
    quads[3072 + code * 4 + 3] = tables[3][code] ?? 0;
  }
}
