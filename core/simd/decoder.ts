import type { Codes } from '../raster/raster.ts';
import { floatChannels, SHORTEST } from '../resample/decode.ts';
import type { Decoding } from '../resample/engine.ts';
import { aligned, type Machine } from './machine.ts';

/** Codes of one row to floats, as decode.ts does it. */
export class Decoder {
  /** Address of the sums of each float channel over all rows so far: doubles. */
  readonly sums: number;
  readonly #machine: Machine;
  readonly #decoding: Decoding;
  readonly #texels: number;
  readonly #stride: number;
  /** Address of the codes of the row that was decoded last. */
  readonly codes: number;
  readonly #tables: readonly number[];
  readonly #quads: number;

  constructor(machine: Machine, decoding: Decoding, texels: number) {
    this.#machine = machine;
    this.#decoding = decoding;
    this.#texels = texels;
    this.#stride = floatChannels(decoding) * 4;
    this.codes = machine.take(codeBytes(decoding, texels));
    this.sums = machine.take(SUM_BYTES);
    machine.views.bytes.fill(0, this.sums, this.sums + SUM_BYTES);
    this.#quads = takesQuads(decoding) ? quadTables(machine, decoding) : 0;
    const kept = new Map<Float32Array, number>();
    if (this.#quads === 0) for (const table of decoding.tables) kept.set(table, kept.get(table) ?? machine.keep(table));
    this.#tables = decoding.tables.map((table) => kept.get(table) ?? 0);
  }

  /** Writes the float row at address `row`, and sums it. */
  decode(codes: Codes, row: number): void {
    const { kernels, views } = this.#machine;
    if (this.#decoding.depth === 8) views.bytes.set(codes, this.codes);
    else views.words.set(codes, this.codes >> 1);
    if (this.#quads !== 0) {
      kernels.decodeQuads(this.codes, this.#quads, this.#decoding.alpha ?? 0, row, this.#texels, this.sums);
      return;
    }
    this.#look(row);
    this.#weigh(row);
    this.sum(row);
  }

  /** Sums the float row at address `row`. */
  sum(row: number): void {
    for (let channel = 0; channel * 4 < this.#stride; channel += 4) {
      this.#machine.kernels.sumRow(row + channel * 4, this.#stride, this.#texels, this.sums + channel * 8);
    }
  }

  #look(row: number): void {
    const { kernels } = this.#machine;
    const { channels, depth, normals } = this.#decoding;
    const look = depth === 8 ? kernels.decodeBytes : kernels.decodeWords;
    const size = depth / 8;
    for (let channel = 0; channel < channels; channel++) {
      const place = row + channel * 4;
      look(this.codes + channel * size, channels * size, this.#tables[channel], place, this.#stride, this.#texels);
    }
    for (const { x, y, z, rebuilt } of normals) {
      const [px, py, pz] = [x, y, z].map((channel) => row + channel * 4);
      kernels.makeUnit(px, py, pz, rebuilt ? 1 : 0, SHORTEST, this.#stride, this.#texels);
    }
  }

  #weigh(row: number): void {
    const { weighted, alpha } = this.#decoding;
    if (alpha === null) return;
    for (const channel of weighted) {
      this.#machine.kernels.weigh(row + channel * 4, row + alpha * 4, this.#stride, this.#texels);
    }
  }
}

/** Bytes that a decoder takes. */
export function decoderBytes(decoding: Decoding, texels: number): number {
  const tables = new Set(decoding.tables);
  const looked = takesQuads(decoding)
    ? 5 * QUAD_BYTES
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

function takesQuads({ depth, channels, normals }: Decoding): boolean {
  return depth === 8 && channels === 4 && normals.length === 0;
}

/** A table for each channel, its values in its own lane; and one of weights, by the code of alpha. */
function quadTables(machine: Machine, { tables, weighted, alpha }: Decoding): number {
  const address = machine.take(5 * QUAD_BYTES);
  const quads = machine.views.floats.subarray(address / 4, (address + 5 * QUAD_BYTES) / 4);
  quads.fill(0);
  tables.forEach((table, channel) => {
    for (let code = 0; code < Math.min(256, table.length); code++)
      quads[channel * 1024 + code * 4 + channel] = table[code];
  });
  for (let code = 0; code < 256; code++) {
    for (let lane = 0; lane < 4; lane++) {
      quads[4096 + code * 4 + lane] = alpha !== null && weighted.includes(lane) ? (tables[alpha][code] ?? 0) : 1;
    }
  }
  return address;
}
