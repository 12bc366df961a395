import type { Deflate, Ports } from '../port.ts';
import { compressions } from './compression.ts';
import { deflateRuns } from './deflate/stream.ts';

/** What writes the compressed files: SHA-256 over a fixed sample deflated once in every way that is in use, by the platform's zlib
 *  and by ourselves. Equal fingerprints promise equal bytes for equal pixels; different ones only equal pixels, since zlib's
 *  output moves with its version and platform. */
export function encoderFingerprint(ports: Pick<Ports, 'deflate' | 'newHash' | 'tokens'>): Promise<string> {
  let known = fingerprints.get(ports.deflate);
  if (known === undefined) {
    known = takeFingerprint(ports);
    fingerprints.set(ports.deflate, known);
  }
  return known;
}

/** Taken once for each deflate: it costs as much as a large texture. */
const fingerprints = new WeakMap<Deflate, Promise<string>>();

async function takeFingerprint({
  deflate,
  newHash,
  tokens,
}: Pick<Ports, 'deflate' | 'newHash' | 'tokens'>): Promise<string> {
  const sample = makeSample();
  const hash = newHash();
  for (const hints of Object.values(compressions)) {
    for await (const piece of deflate([sample], hints)) hash.update(piece);
  }
  for (const piece of deflateRuns([sample], tokens)) hash.update(piece);
  return hash.hex();
}

const HALF = 128 * 1024;

/** Texels of 4 bytes along a tile's side, and along a row of the tiled half. */
const TILE = 32;
const ROW = 256;

/** Tiles to draw from. */
const TILES = 8;

/** Half noise and half tiles, 256 KiB. A flat sample does not tell zlibs apart. */
export function makeSample(): Uint8Array {
  const draw = newDraw(0x51e0f);
  const sample = new Uint8Array(2 * HALF);
  // Two draws meet in one byte, so that small codes are likelier: even noise would be stored as it is.
  for (let at = 0; at < HALF; at++) sample[at] = draw() & draw();
  const tiles = Uint8Array.from({ length: TILES * TILE * TILE * 4 }, draw);
  const places = Uint8Array.from({ length: HALF / (4 * TILE * TILE) }, () => draw() % TILES);
  for (let texel = 0; texel < HALF / 4; texel++) {
    const x = texel % ROW;
    const y = Math.floor(texel / ROW);
    const tile = places[Math.floor(y / TILE) * (ROW / TILE) + Math.floor(x / TILE)];
    const from = 4 * ((tile * TILE + (y % TILE)) * TILE + (x % TILE));
    sample.set(tiles.subarray(from, from + 4), HALF + 4 * texel);
  }
  return sample;
}

/** Bytes of a 32-bit xorshift with shifts 13, 17, 5, the top eight bits of each state. [Marsaglia03] */
function newDraw(seed: number): () => number {
  let state = seed;
  return () => {
    state ^= state << 13;
    state ^= state >>> 17;
    state ^= state << 5;
    return state >>> 24;
  };
}
