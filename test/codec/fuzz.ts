import { deflateSync, inflateSync } from 'node:zlib';
import { crc32 } from '../../core/codec/crc.ts';
import { numbers } from '../fixtures/noise.ts';
import { chunk, type PngRecipe, writePng } from '../fixtures/rawpng.ts';

/** Small pictures of every form that a PNG has: color types, depths, interlace, transparency, filters, cut data. */
export function fuzzSeeds(): Uint8Array[] {
  const forms: readonly (readonly [colorType: number, depths: readonly number[]])[] = [
    [0, [1, 2, 4, 8, 16]],
    [2, [8, 16]],
    [3, [1, 2, 4, 8]],
    [4, [8, 16]],
    [6, [8, 16]],
  ];
  const recipes = forms.flatMap(([colorType, depths]) =>
    depths.flatMap((bitDepth) =>
      [0, 1].map((interlaced) => ({ colorType, bitDepth, interlaced: interlaced as 0 | 1 })),
    ),
  );
  return recipes.map((form, at) => {
    const sample = (x: number, y: number, channel: number) => (x * 5 + y * 11 + channel * 3 + at) % 2 ** form.bitDepth;
    const recipe: PngRecipe = {
      width: 3 + (at % 7),
      height: 2 + (at % 5),
      ...form,
      sample,
      filter: (row) => (row + at) % 5,
    };
    return writePng({ ...recipe, ahead: chunksFor(form), ...(at % 3 === 0 ? { idatBytes: 7 } : {}) });
  });
}

function chunksFor({ colorType, bitDepth }: Pick<PngRecipe, 'colorType' | 'bitDepth'>): Uint8Array[] {
  const chunks = [chunk('gAMA', [0, 0, 177, 143])];
  if (colorType === 3) chunks.push(chunk('PLTE', new Uint8Array(3 * 2 ** bitDepth).fill(9)), chunk('tRNS', [7]));
  if (colorType === 0) chunks.push(chunk('tRNS', [0, 1]));
  if (colorType === 2) chunks.push(chunk('tRNS', [0, 1, 0, 2, 0, 3]));
  return chunks;
}

export type Mutation = 'bytes' | 'header' | 'chunks' | 'stream' | 'filters' | 'length';

const mutations: readonly Mutation[] = ['bytes', 'header', 'chunks', 'stream', 'filters', 'length'];

/** The file that a number stands for: a seed with one to four faults of one kind. All but `bytes` mostly put the check sums of
 *  chunks right, so that the damage gets as far as it can. */
export function mutant(
  seeds: readonly Uint8Array[],
  number: number,
): { readonly kind: Mutation; readonly file: Uint8Array } {
  const next = numbers(number);
  const seed = seeds[next() % seeds.length];
  const kind = mutations[next() % mutations.length];
  return { kind, file: mutate[kind](seed, next) };
}

type Mutate = (file: Uint8Array, next: () => number) => Uint8Array;

const mutate: Readonly<Record<Mutation, Mutate>> = {
  bytes: (file, next) => withBytes(file, 0, file.length, next),
  header(file, next) {
    const bytes = file.slice();
    const at = 16 + (next() % 13);
    // Small numbers are those that mean something; large extents and any other byte come too.
    bytes[at] = next() % 3 === 0 ? next() : next() % 17;
    return mended(bytes);
  },
  chunks(file, next) {
    const chunks = chunksOf(file);
    for (let count = 1 + (next() % 3); count > 0; count--) {
      const [a, b] = [next() % chunks.length, next() % chunks.length];
      const way = next() % 6;
      if (way === 0) [chunks[a], chunks[b]] = [chunks[b], chunks[a]];
      else if (way === 1) chunks.splice(b, 0, chunks[a]);
      else if (way === 2) chunks.splice(a, 1);
      else if (way === 3) chunks[a] = withBytes(chunks[a], 4, 8, next);
      else if (way === 4) chunks[a] = resized(chunks[a], next);
      else chunks[a] = withBytes(chunks[a], 0, chunks[a].length, next);
      if (chunks.length === 0) break;
    }
    const bytes = joined(file, chunks);
    return next() % 4 === 0 ? bytes : mended(bytes);
  },
  stream: (file, next) => withStream(file, (stream) => withBytes(stream, 0, stream.length, next)),
  filters(file, next) {
    return withStream(file, (stream) => {
      const rows = inflateSync(stream);
      const changed = next() % 4 === 0 ? resized(rows, next) : withBytes(rows, 0, rows.length, next, () => next() % 7);
      const level = next() % 10;
      return deflateSync(changed, { level });
    });
  },
  length(file, next) {
    if (next() % 4 === 0) return new Uint8Array(Buffer.concat([file, new Uint8Array(next() % 40).fill(next())]));
    if (next() % 2 === 0) return file.slice(0, next() % file.length);
    // What is cut off is image data, in a whole chunk.
    return withStream(file, (stream) => stream.subarray(0, next() % stream.length));
  },
};

function withBytes(file: Uint8Array, from: number, to: number, next: () => number, value = next): Uint8Array {
  const bytes = file.slice();
  for (let count = 1 + (next() % 4); count > 0; count--) bytes[from + (next() % (to - from))] = value();
  return bytes;
}

function resized(bytes: Uint8Array, next: () => number): Uint8Array {
  const longer = new Uint8Array(Math.max(0, bytes.length + (next() % 9) - 4));
  longer.set(bytes.subarray(0, longer.length));
  return longer;
}

/** Chunks as they stand in a whole file, frames included. */
function chunksOf(file: Uint8Array): Uint8Array[] {
  const view = new DataView(file.buffer, file.byteOffset, file.length);
  const chunks: Uint8Array[] = [];
  for (let at = 8; at < file.length; ) {
    const end = at + 12 + view.getUint32(at);
    chunks.push(file.slice(at, end));
    at = end;
  }
  return chunks;
}

function joined(file: Uint8Array, chunks: readonly Uint8Array[]): Uint8Array {
  return new Uint8Array(Buffer.concat([file.subarray(0, 8), ...chunks]));
}

/** The same file with another zlib stream, in one chunk. */
function withStream(file: Uint8Array, change: (stream: Uint8Array) => Uint8Array): Uint8Array {
  const chunks = chunksOf(file);
  const isData = (each: Uint8Array) => String.fromCharCode(...each.subarray(4, 8)) === 'IDAT';
  const stream = Buffer.concat(chunks.filter(isData).map((each) => each.subarray(8, -4)));
  const first = chunks.findIndex(isData);
  const others = chunks.filter((each) => !isData(each));
  return joined(file, [...others.slice(0, first), chunk('IDAT', change(stream)), ...others.slice(first)]);
}

/** Lengths that still fit keep their place; every check sum that can be found is put right. */
function mended(bytes: Uint8Array): Uint8Array {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  for (let at = 8; at + 12 <= bytes.length; ) {
    const end = at + 12 + view.getUint32(at);
    if (end > bytes.length) break;
    view.setUint32(end - 4, crc32(bytes.subarray(at + 4, end - 4)));
    at = end;
  }
  return bytes;
}
