import { type Extent, expandIndexed, type IndexedRaster, type StraightRaster } from '../raster/raster.ts';
import { buildFootprints, checkSmaller } from './footprint.ts';
import { pickTexels } from './pick.ts';

/** Each target texel takes the color that covers most of it. Votes are exact overlaps of areas. All texels of alpha 0 (the
 *  last channel of two or four) vote as one color, whose hidden codes come from the one nearest the target's center. A tie goes
 *  to the color with a texel nearest the center, then to the lowest RGBA as an integer. Palette entries of equal color vote
 *  together; an index is kept. Throws RangeError where the target is larger than the source. */
export function majority<R extends StraightRaster | IndexedRaster>(raster: R, extent: Extent): R {
  checkSmaller(raster.extent, extent);
  return pickTexels(raster, extent, winners(raster.kind === 'indexed' ? expandIndexed(raster) : raster, extent));
}

/** Most bytes that `majority` holds beside its source and result: the winners, an expanded palette, and a ballot in which
 *  every texel of the largest footprint has a color of its own. */
export function majorityBytes(source: Extent, target: Extent): number {
  const footprint = (from: number, to: number) => Math.min(from, Math.ceil(from / to) + 1);
  const voters = footprint(source.width, target.width) * footprint(source.height, target.height);
  return target.width * target.height * 4 + source.width * source.height * 4 + voters * BALLOT_BYTES;
}

/** The source texel whose codes each target texel takes. */
function winners(source: StraightRaster, extent: Extent): Int32Array {
  const across = buildFootprints(source.extent.width, extent.width);
  const down = buildFootprints(source.extent.height, extent.height);
  const ballot = new Ballot(source);
  const result = new Int32Array(extent.width * extent.height);
  for (let jy = 0; jy < extent.height; jy++) {
    for (let jx = 0; jx < extent.width; jx++) {
      ballot.clear();
      for (let ky = 0; ky < down.count[jy]; ky++) {
        const y = down.first[jy] + ky;
        // Distances from the center in source texels, times 2 width height: integers, so mirrored texels tie exactly.
        const dy = ((2 * y + 1) * down.to - (2 * jy + 1) * down.from) * across.to;
        const rowOverlap = down.overlap[down.start[jy] + ky];
        for (let kx = 0; kx < across.count[jx]; kx++) {
          const x = across.first[jx] + kx;
          const dx = ((2 * x + 1) * across.to - (2 * jx + 1) * across.from) * down.to;
          ballot.vote(
            y * source.extent.width + x,
            rowOverlap * across.overlap[across.start[jx] + kx],
            dx * dx + dy * dy,
          );
        }
      }
      result[jy * extent.width + jx] = ballot.winner();
    }
  }
  return result;
}

/** A class takes 20 bytes and two slots of 4; up to twice the classes in use are allocated (56), and the largest former
 *  arrays live on while they are copied (16). */
const BALLOT_BYTES = 72;

/** Votes by color, in a hash table with open addressing: a Map holds no more than 2^24 colors, an image may. */
class Ballot {
  readonly #channels: number;
  readonly #codes: ArrayLike<number>;
  readonly #hasAlpha: boolean;
  /** 1 + the class in a slot, 0 where it is free; a power of two of them, at most half full. */
  #slots = new Int32Array(16);
  /** Per class: the texel nearest the center, its distance, and the votes. */
  #texel = new Int32Array(8);
  #distance = new Float64Array(8);
  #votes = new Float64Array(8);
  #count = 0;

  constructor(source: StraightRaster) {
    this.#channels = source.channels;
    this.#codes = source.codes;
    this.#hasAlpha = source.channels % 2 === 0;
  }

  clear(): void {
    this.#slots.fill(0);
    this.#count = 0;
  }

  vote(texel: number, overlap: number, distance: number): void {
    const slot = this.#slotOf(texel);
    const index = this.#slots[slot] - 1;
    if (index < 0) {
      this.#slots[slot] = ++this.#count;
      this.#texel[this.#count - 1] = texel;
      this.#distance[this.#count - 1] = distance;
      this.#votes[this.#count - 1] = overlap;
      if (this.#count === this.#texel.length) this.#grow();
      return;
    }
    this.#votes[index] += overlap;
    if (this.#nearer(distance, texel, index)) {
      this.#distance[index] = distance;
      this.#texel[index] = texel;
    }
  }

  winner(): number {
    let best = 0;
    for (let index = 1; index < this.#count; index++) {
      const lead = this.#votes[index] - this.#votes[best];
      if (lead > 0 || (lead === 0 && this.#nearer(this.#distance[index], this.#texel[index], best))) best = index;
    }
    return this.#texel[best];
  }

  #nearer(distance: number, texel: number, index: number): boolean {
    if (distance !== this.#distance[index]) return distance < this.#distance[index];
    return this.#compare(texel, this.#texel[index]) < 0;
  }

  /** Order of two texels by RGBA as an integer; gray compares as its red, green and blue would. */
  #compare(one: number, other: number): number {
    for (let channel = 0; channel < this.#channels; channel++) {
      const difference = this.#codes[one * this.#channels + channel] - this.#codes[other * this.#channels + channel];
      if (difference !== 0) return difference;
    }
    return 0;
  }

  #slotOf(texel: number): number {
    const mask = this.#slots.length - 1;
    let slot = this.#hash(texel) & mask;
    while (this.#slots[slot] !== 0 && !this.#same(texel, this.#texel[this.#slots[slot] - 1])) slot = (slot + 1) & mask;
    return slot;
  }

  #same(one: number, other: number): boolean {
    return (this.#isClear(one) && this.#isClear(other)) || this.#compare(one, other) === 0;
  }

  #isClear(texel: number): boolean {
    return this.#hasAlpha && this.#codes[(texel + 1) * this.#channels - 1] === 0;
  }

  /** FNV-1a over the codes, then its high bits folded into those that choose the slot; 0 for alpha 0.  [FNV] */
  #hash(texel: number): number {
    if (this.#isClear(texel)) return 0;
    let hash = 0x811c9dc5;
    for (let channel = 0; channel < this.#channels; channel++) {
      hash = Math.imul(hash ^ this.#codes[texel * this.#channels + channel], 0x01000193);
    }
    return hash ^ (hash >>> 15);
  }

  #grow(): void {
    const size = this.#texel.length * 2;
    this.#texel = resized(this.#texel, new Int32Array(size));
    this.#distance = resized(this.#distance, new Float64Array(size));
    this.#votes = resized(this.#votes, new Float64Array(size));
    this.#slots = new Int32Array(size * 2);
    for (let index = 0; index < this.#count; index++) this.#slots[this.#slotOf(this.#texel[index])] = index + 1;
  }
}

function resized<A extends Int32Array | Float64Array>(from: A, to: A): A {
  to.set(from);
  return to;
}
