import type { DeflateHints } from '../port.ts';
import type { IndexedRaster, StraightRaster } from '../raster/raster.ts';

/** Every way in which the platform deflates files here; the encoder fingerprint tries each of them, and our own. */
export const compressions = {
  /** Codes that name colors rather than measure them: palettes and art of few colors. Long matches pay
   *  (measured on 16-texel tiles: level 8 is 40 % smaller than level 6; level 9 gains nothing more). */
  labels: { level: 8 },
  /** Tiles and patterns, and unfiltered texels. */
  repeating: { level: 6 },
} as const satisfies Record<string, DeflateHints>;

/** `painted` is gradients and grain. After the row filter only runs are worth looking for (measured: 1-9 % smaller than zlib's level 6),
 *  which is done here (deflate/stream.ts): in a fifth of zlib's time, and with the same bytes everywhere. */
export type Compression = keyof typeof compressions | 'painted';

/** How to compress a PNG of this raster, from its codes alone, so that every platform chooses alike. */
export function chooseCompression(raster: StraightRaster | IndexedRaster): Compression {
  if (raster.kind === 'indexed' || hasFewColors(raster)) return 'labels';
  return repeatShare(raster) >= REPEATING_SHARE ? 'repeating' : 'painted';
}

/** Measured: painted art and grainy normal maps 0-0.02, regular normal maps 0.15-0.4 (level 6 and runs are then within
 *  6 % of each other), tiles and sprite sheets 0.35-1 (runs alone are up to 7 times larger). So err to the low side. */
const REPEATING_SHARE = 1 / 8;

/** A palette could hold them all. Gray is left out: it measures even where it has few codes. */
const FEW_COLORS = 256;

function hasFewColors({ channels, depth, codes }: StraightRaster): boolean {
  if (channels < 3 || depth !== 8) return false;
  const seen = new Set<number>();
  let before = -1;
  for (let at = 0; at < codes.length; at += channels) {
    const color = codes[at] | (codes[at + 1] << 8) | (codes[at + 2] << 16) | (channels === 4 ? codes[at + 3] << 24 : 0);
    if (color === before) continue;
    before = color;
    seen.add(color);
    if (seen.size > FEW_COLORS) return false;
  }
  return true;
}

/** What zlib's window reaches back, in bytes. [RFC1951, "Compressed representation overview"] */
const WINDOW = 32768;

/** Windows that are looked at, evenly spread from the top to the bottom. */
const BANDS = 4;

/** Codes that must agree to count as a repeat: three RGBA texels. */
const REACH = 12;

const SLOTS = 1 << 14;

/** Among places that do not continue a run: the share whose next codes stood earlier in the same window, 0..1. */
function repeatShare({ extent, channels, depth, codes }: StraightRaster): number {
  const rowCodes = extent.width * channels;
  const bandRows = Math.max(1, Math.min(extent.height, Math.floor(WINDOW / ((depth / 8) * rowCodes))));
  const bands = Math.min(BANDS, Math.floor(extent.height / bandRows));
  const lastSeen = new Int32Array(SLOTS);
  let places = 0;
  let repeats = 0;
  for (let band = 0; band < bands; band++) {
    const top = bands === 1 ? 0 : Math.floor((band * (extent.height - bandRows)) / (bands - 1));
    const end = (top + bandRows) * rowCodes - REACH;
    lastSeen.fill(-1);
    for (let at = top * rowCodes + channels; at <= end; at += channels) {
      if (same(codes, at, at - channels, channels)) continue;
      const slot = hash(codes, at);
      places++;
      if (lastSeen[slot] >= 0 && same(codes, at, lastSeen[slot], REACH)) repeats++;
      lastSeen[slot] = at;
    }
  }
  return places === 0 ? 1 : repeats / places;
}

function same(codes: ArrayLike<number>, one: number, other: number, count: number): boolean {
  for (let index = 0; index < count; index++) {
    if (codes[one + index] !== codes[other + index]) return false;
  }
  return true;
}

/** FNV-1a's prime, folded to a slot; only speed hangs on it, since equal hashes are compared. */
function hash(codes: ArrayLike<number>, at: number): number {
  let value = 0;
  for (let index = 0; index < REACH; index++) value = Math.imul(value ^ codes[at + index], 0x01000193);
  return (value ^ (value >>> 15)) & (SLOTS - 1);
}
