import type { Picture } from '../proof/want.ts';
import { type Extent, maxCode } from '../raster/raster.ts';

/** A shift by whole texels that makes one picture of the other. */
export interface Move {
  /** Texels to the right and down. */
  readonly dx: number;
  readonly dy: number;
  /** Whether what leaves on one side comes in on the other. */
  readonly wrapped: boolean;
  /** Share of the texels that lie on both, and are not transparent on both, that are equal. */
  readonly share: number;
}

/** Finds a shift by whole texels under which nearly all of the texels that both have are equal, code for code; null where there is none, for
 *  pictures too flat or too small to tell, and for those above 2048x2048 texels, which would take too much memory. A few marked
 *  blocks of the first are looked for in the second. */
export function findMove(before: Picture, after: Picture): Move | null {
  if (areaOf(before.extent) > MOST_TEXELS || areaOf(after.extent) > MOST_TEXELS) return null;
  const side = blockSide(before.extent, after.extent);
  if (side === null) return null;
  const [one, other] = [signsOf(before), signsOf(after)];
  const blocks = markedBlocks(one, before.extent, side);
  const votes = new Map<string, Candidate>();
  const windows = windowHashes(other, after.extent, side);
  for (const block of blocks) {
    const wanted = blockHash(one, before.extent, block, side);
    for (const place of placesOf(windows, wanted, after.extent, side)) {
      for (const candidate of candidatesOf(block, place, before.extent, after.extent)) {
        const key = `${candidate.dx} ${candidate.dy} ${candidate.wrapped}`;
        votes.set(key, { ...candidate, votes: (votes.get(key)?.votes ?? 0) + 1 });
      }
    }
  }
  const tried = [...votes.values()].sort((a, b) => b.votes - a.votes || lengthOf(a) - lengthOf(b)).slice(0, MOST_TRIED);
  let best: Move | null = null;
  for (const { dx, dy, wrapped } of tried) {
    const share = equalShare(one, before.extent, other, after.extent, { dx, dy, wrapped });
    // Round the edges all texels are explained, not those alone that both have.
    const isBetter = best === null || share > best.share || (share === best.share && wrapped);
    if (share >= LEAST_SHARE && isBetter) best = { dx, dy, wrapped, share };
  }
  return best;
}

const MOST_TEXELS = 2048 * 2048;
const MOST_TRIED = 8;
/** Shifts that are tried for one block; more means a repeating pattern, in which every one of them is as good. */
const MOST_PLACES = 64;
/** A picture that was moved and touched up in one texel of fifty is still said to be moved. */
const LEAST_SHARE = 0.98;
/** The part of the smaller picture that must lie on both. */
const LEAST_OVERLAP = 0.25;

interface Candidate {
  readonly dx: number;
  readonly dy: number;
  readonly wrapped: boolean;
  readonly votes: number;
}

interface Spot {
  readonly x: number;
  readonly y: number;
}

function blockSide(one: Extent, other: Extent): number | null {
  const least = Math.min(one.width, one.height, other.width, other.height);
  return least >= 16 ? 8 : least >= 8 ? 4 : null;
}

/** One number a texel, from all its codes; 0 where it is transparent, whatever color hides there. */
function signsOf({ extent, channels, depth, codes, meaning }: Picture): Int32Array {
  const signs = new Int32Array(areaOf(extent));
  const wide = depth === 8 ? 257 : 1;
  const opaque = maxCode(16);
  for (let texel = 0; texel < signs.length; texel++) {
    const at = texel * channels;
    if (meaning.alpha !== null && codes[at + meaning.alpha] === 0) continue;
    const gray = channels < 3;
    const alpha = channels === 4 ? codes[at + 3] * wide : channels === 2 ? codes[at + 1] * wide : opaque;
    let sign = mix(FNV_OFFSET, codes[at] * wide);
    sign = mix(sign, codes[gray ? at : at + 1] * wide);
    sign = mix(sign, codes[gray ? at : at + 2] * wide);
    sign = mix(sign, alpha);
    signs[texel] = sign === 0 ? 1 : sign;
  }
  return signs;
}

/** Blocks of the picture with most changes between neighbors, one for each part of it. */
function markedBlocks(signs: Int32Array, { width, height }: Extent, side: number): Spot[] {
  const best: (Spot & { readonly changes: number })[] = [];
  for (let part = 0; part < 9; part++) {
    const [left, right] = [Math.floor(((part % 3) * width) / 3), Math.floor((((part % 3) + 1) * width) / 3)];
    const row = Math.floor(part / 3);
    const [top, bottom] = [Math.floor((row * height) / 3), Math.floor(((row + 1) * height) / 3)];
    let found: (Spot & { readonly changes: number }) | null = null;
    for (let y = top; y < bottom && y + side <= height; y += side) {
      for (let x = left; x < right && x + side <= width; x += side) {
        const changes = changesIn(signs, width, x, y, side);
        if (changes >= side && changes > (found?.changes ?? 0)) found = { x, y, changes };
      }
    }
    if (found !== null) best.push(found);
  }
  return best.sort((a, b) => b.changes - a.changes).slice(0, 5);
}

function changesIn(signs: Int32Array, width: number, left: number, top: number, side: number): number {
  let changes = 0;
  for (let y = top; y < top + side; y++) {
    for (let x = left + 1; x < left + side; x++) {
      if (signs[y * width + x] !== signs[y * width + x - 1]) changes++;
    }
  }
  return changes;
}

// Hashes of blocks are polynomials modulo 2^32 in both directions, so that they roll along rows and then down columns.
const ALONG = 0x01000193;
const DOWN = 0x2c1b3c6d;

function blockHash(signs: Int32Array, { width }: Extent, { x, y }: Spot, side: number): number {
  let hash = 0;
  for (let row = 0; row < side; row++) {
    let line = 0;
    for (let column = 0; column < side; column++) {
      line = (Math.imul(line, ALONG) + signs[(y + row) * width + x + column]) | 0;
    }
    hash = (Math.imul(hash, DOWN) + line) | 0;
  }
  return hash;
}

/** Hash of the block whose first texel is this one, for each texel that has room for it. */
function windowHashes(signs: Int32Array, { width, height }: Extent, side: number): Int32Array {
  const [leaving, sinking] = [powerOf(ALONG, side), powerOf(DOWN, side)];
  const lines = new Int32Array(signs.length);
  for (let y = 0; y < height; y++) {
    let line = 0;
    for (let x = 0; x < width; x++) {
      const at = y * width + x;
      line = (Math.imul(line, ALONG) + signs[at]) | 0;
      if (x >= side) line = (line - Math.imul(leaving, signs[at - side])) | 0;
      if (x >= side - 1) lines[at - side + 1] = line;
    }
  }
  const hashes = new Int32Array(signs.length);
  for (let x = 0; x + side <= width; x++) {
    let hash = 0;
    for (let y = 0; y < height; y++) {
      const at = y * width + x;
      hash = (Math.imul(hash, DOWN) + lines[at]) | 0;
      if (y >= side) hash = (hash - Math.imul(sinking, lines[at - side * width])) | 0;
      if (y >= side - 1) hashes[at - (side - 1) * width] = hash;
    }
  }
  return hashes;
}

function powerOf(base: number, exponent: number): number {
  let power = 1;
  for (let step = 0; step < exponent; step++) power = Math.imul(power, base);
  return power;
}

function placesOf(windows: Int32Array, wanted: number, { width, height }: Extent, side: number): Spot[] {
  const places: Spot[] = [];
  for (let y = 0; y + side <= height; y++) {
    for (let x = 0; x + side <= width; x++) {
      if (windows[y * width + x] !== wanted) continue;
      places.push({ x, y });
      if (places.length === MOST_PLACES) return places;
    }
  }
  return places;
}

/** A shift, and with equal extents the same one round the edges. */
function candidatesOf(from: Spot, to: Spot, before: Extent, after: Extent): Omit<Candidate, 'votes'>[] {
  const [dx, dy] = [to.x - from.x, to.y - from.y];
  const same = before.width === after.width && before.height === after.height;
  if (same && dx === 0 && dy === 0) return [];
  if (!same) return [{ dx, dy, wrapped: false }];
  // Of the two ways round the shorter is said.
  const short = (step: number, size: number): number => {
    const way = ((step % size) + size) % size;
    return way > size / 2 ? way - size : way;
  };
  return [
    { dx, dy, wrapped: false },
    { dx: short(dx, before.width), dy: short(dy, before.height), wrapped: true },
  ];
}

function lengthOf({ dx, dy }: Pick<Candidate, 'dx' | 'dy'>): number {
  return Math.abs(dx) + Math.abs(dy);
}

function equalShare(
  one: Int32Array,
  before: Extent,
  other: Int32Array,
  after: Extent,
  { dx, dy, wrapped }: Omit<Candidate, 'votes'>,
): number {
  let [overlap, compared, equal] = [0, 0, 0];
  for (let y = 0; y < before.height; y++) {
    const row = wrapped ? wrap(y + dy, after.height) : y + dy;
    if (row < 0 || row >= after.height) continue;
    for (let x = 0; x < before.width; x++) {
      const column = wrapped ? wrap(x + dx, after.width) : x + dx;
      if (column < 0 || column >= after.width) continue;
      overlap++;
      const [was, is] = [one[y * before.width + x], other[row * after.width + column]];
      if (was === 0 && is === 0) continue;
      compared++;
      if (was === is) equal++;
    }
  }
  if (overlap < LEAST_OVERLAP * Math.min(one.length, other.length)) return 0;
  return compared === 0 ? 0 : equal / compared;
}

function wrap(index: number, size: number): number {
  return ((index % size) + size) % size;
}

function areaOf({ width, height }: Extent): number {
  return width * height;
}

/** [FNV] */
const FNV_OFFSET = 0x811c9dc5 | 0;
const FNV_PRIME = 0x01000193;

function mix(hash: number, code: number): number {
  return Math.imul(hash ^ code, FNV_PRIME) ^ (hash >>> 15);
}
