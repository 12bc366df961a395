import { type Codes, type Extent, newCodes, type StraightRaster } from '../../core/raster/raster.ts';
import { numbers } from '../fixtures/noise.ts';

/** What textures look like to a resampler and to a compressor. */
export type Character = 'painted' | 'flat' | 'tiled' | 'cutout' | 'pixel art' | '16-bit';

export const characters: readonly Character[] = ['painted', 'flat', 'tiled', 'cutout', 'pixel art', '16-bit'];

/** An image of a character, always the same for a seed. RGBA, but for `tiled` and `16-bit`, which are RGB. */
export function draw(character: Character, extent: Extent, seed: number): StraightRaster {
  const channels = character === 'tiled' || character === '16-bit' ? 3 : 4;
  const depth = character === '16-bit' ? 16 : 8;
  const codes = newCodes(depth, extent.width * extent.height * channels);
  DRAWN[character](codes, extent, seed);
  return { kind: 'straight', extent, channels, depth, codes };
}

const DRAWN: Readonly<Record<Character, (codes: Codes, extent: Extent, seed: number) => void>> = {
  painted: (codes, extent, seed) => paint(codes, extent, seed, 4, 'soft', 1),
  '16-bit': (codes, extent, seed) => paint(codes, extent, seed, 3, 'soft', 257),
  cutout: (codes, extent, seed) => paint(codes, extent, seed, 4, 'hard', 1),
  flat: drawFlat,
  tiled: drawTiled,
  'pixel art': drawSprites,
};

/** Smooth color at several frequencies with grain; alpha in blobs of soft or hard edges. Half of it is opaque, an eighth gone. */
function paint(
  codes: Codes,
  { width, height }: Extent,
  seed: number,
  channels: 3 | 4,
  edges: 'soft' | 'hard',
  scale: 1 | 257,
): void {
  const light = layered(width, height, seed, [6, 23, 97]);
  const strokes = layered(width, height, seed + 10, [40, 160]);
  const blobs = channels === 4 ? layered(width, height, seed + 20, [7, 31]) : null;
  const next = numbers(seed + 30);
  for (let texel = 0, at = 0; texel < width * height; texel++, at += channels) {
    const stroke = Math.round(strokes[texel] * 9) / 9;
    const grain = next();
    const dull = ((grain & 255) - 128) / 50;
    codes[at] = clamped(40 + 150 * light[texel] + 55 * stroke + dull, scale);
    codes[at + 1] = clamped(60 + 110 * light[texel] + 48 * stroke + ((grain >> 8) & 3) + dull, scale);
    codes[at + 2] = clamped(90 + 80 * light[texel] + 30 * stroke - ((grain >> 10) & 3) + dull, scale);
    if (blobs === null) continue;
    const alpha = 255 * ((blobs[texel] - 0.33) * (edges === 'soft' ? 6 : 400));
    codes[at + 3] = clamped(alpha, 1);
  }
}

function clamped(code: number, scale: number): number {
  return Math.round(Math.min(255, Math.max(0, code)) * scale);
}

/** Noise 0..1: lattices of so many cells a side, each lower by half than the one before. */
function layered(width: number, height: number, seed: number, cells: readonly number[]): Float32Array {
  const sum = new Float32Array(width * height);
  let weight = 2 ** (cells.length - 1);
  const total = 2 ** cells.length - 1;
  cells.forEach((count, layer) => {
    const lattice = latticeOf(seed + layer, (count + 1) ** 2);
    const share = weight / total;
    const columns = Float32Array.from({ length: width }, (_, x) => (x * count) / width);
    for (let y = 0, at = 0; y < height; y++) {
      const v = (y * count) / height;
      const row = Math.floor(v) * (count + 1);
      const ty = eased(v - Math.floor(v));
      for (let x = 0; x < width; x++, at++) {
        const u = columns[x];
        const cell = row + (u | 0);
        const tx = eased(u - (u | 0));
        const above = lattice[cell] + (lattice[cell + 1] - lattice[cell]) * tx;
        const below = lattice[cell + count + 1] + (lattice[cell + count + 2] - lattice[cell + count + 1]) * tx;
        sum[at] += share * (above + (below - above) * ty);
      }
    }
    weight /= 2;
  });
  return sum;
}

function latticeOf(seed: number, length: number): Float32Array {
  const next = numbers(seed);
  return Float32Array.from({ length }, () => next() / 2 ** 32);
}

function eased(t: number): number {
  return t * t * (3 - 2 * t);
}

/** A few areas of one color each, as on icons. */
function drawFlat(codes: Codes, { width, height }: Extent, seed: number): void {
  const next = numbers(seed);
  const colors = Array.from({ length: 8 }, () => [
    next() % 256,
    next() % 256,
    next() % 256,
    next() % 4 === 0 ? 0 : 255,
  ]);
  for (let y = 0, at = 0; y < height; y++) {
    for (let x = 0; x < width; x++, at += 4) {
      const [u, v] = [x / width - 0.5, y / height - 0.5];
      const ring = Math.floor(Math.sqrt(u * u + v * v) * 7) + (u > v ? 0 : 3);
      codes.set(colors[ring % colors.length], at);
    }
  }
}

/** Bricks of 32 x 16 texels, drawn once and laid all over. */
function drawTiled(codes: Codes, { width, height }: Extent, seed: number): void {
  const next = numbers(seed);
  const brick = Uint8Array.from({ length: 32 * 16 * 3 }, (_, at) => 90 + (next() % 40) + (at % 3) * 15);
  for (let y = 0, at = 0; y < height; y++) {
    for (let x = 0; x < width; x++, at += 3) {
      const column = (x + (y & 16)) & 31;
      const from = ((y & 15) * 32 + column) * 3;
      const joint = column === 0 || (y & 15) === 0;
      for (let channel = 0; channel < 3; channel++) codes[at + channel] = joint ? 60 : brick[from + channel];
    }
  }
}

/** Cells of 16 x 16 with a mirrored figure of few colors each; alpha is 0 or 255. */
function drawSprites(codes: Codes, { width, height }: Extent, seed: number): void {
  const next = numbers(seed);
  const colors = Array.from({ length: 15 }, () => [next() % 256, next() % 256, next() % 256]);
  const columns = Math.ceil(width / 16);
  const cells = Uint8Array.from({ length: columns * Math.ceil(height / 16) * 128 }, () => next() % 24);
  for (let y = 0, at = 0; y < height; y++) {
    for (let x = 0; x < width; x++, at += 4) {
      const half = x & 8 ? 15 - (x & 15) : x & 15;
      const color = cells[((y >> 4) * columns + (x >> 4)) * 128 + (y & 15) * 8 + half];
      if (color < colors.length) codes.set([...colors[color], 255], at);
    }
  }
}
