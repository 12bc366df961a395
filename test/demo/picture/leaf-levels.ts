import { buildChain } from '../../../core/chain/chain.ts';
import { srgbEncoder } from '../../../core/color/encoder.ts';
import { decodeSrgb } from '../../../core/color/transfer.ts';
import type { StraightRaster } from '../../../core/raster/raster.ts';
import { resolveTreatment } from '../../../core/treatment/resolve.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { paintAlderTwig } from '../paint/alder-twig.ts';

/** Pixels of one view's side, and between views. */
const SIDE = 168;
const GAP = 8;
const LEVELS = 6;

/** README's picture: levels 0 to 5 of the demo's leaf as a renderer shows them, magnified to one size, bilinear and tested
 *  against the cutoff. Above, averaged as codes without regard to alpha; below, as the demo builds it. */
export function paintLeafLevels(): StraightRaster {
  const leaf = paintAlderTwig() as StraightRaster;
  const masked = resolveTreatment(null, 'leaf.png').treatment;
  const built: Treatment = { ...masked, alpha: { ...masked.alpha, use: 'mask', keepCoverage: true } };
  const careless: Treatment = {
    ...built,
    light: 'code',
    alpha: { ...built.alpha, weight: false, keepCoverage: false },
    fill: 'none',
  };
  const width = GAP + LEVELS * (SIDE + GAP);
  const height = GAP + 2 * (SIDE + GAP);
  const codes = new Uint8Array(width * height * 3).fill(24);
  for (const [row, treatment] of [careless, built].entries()) {
    const { images } = buildChain(leaf, treatment);
    for (let level = 0; level < LEVELS; level++) {
      const left = GAP + level * (SIDE + GAP);
      const top = GAP + row * (SIDE + GAP);
      drawView(images[level].raster as StraightRaster, codes, width, left, top);
    }
  }
  return { kind: 'straight', extent: { width, height }, channels: 3, depth: 8, codes };
}

/** Light of the evening sky behind the leaf, from top to bottom. */
const SKY = [
  [0.1, 0.17, 0.36],
  [0.72, 0.46, 0.27],
] as const;

function drawView(raster: StraightRaster, codes: Uint8Array, width: number, left: number, top: number): void {
  const encoder = srgbEncoder(8);
  for (let y = 0; y < SIDE; y++) {
    for (let x = 0; x < SIDE; x++) {
      const [red, green, blue, alpha] = sample(raster, (x + 0.5) / SIDE, (y + 0.5) / SIDE);
      const share = (y + 0.5) / SIDE;
      const sky = SKY[0].map((from, channel) => from + (SKY[1][channel] - from) * share);
      const light = alpha >= 0.5 ? [red, green, blue] : sky;
      const at = ((top + y) * width + left + x) * 3;
      for (let channel = 0; channel < 3; channel++) codes[at + channel] = encoder.codeOf(light[channel]);
    }
  }
}

/** Bilinear, as a GPU samples: colors decoded first, the four channels interpolated each by itself. */
function sample({ extent, codes }: StraightRaster, u: number, v: number): readonly number[] {
  const x = u * extent.width - 0.5;
  const y = v * extent.height - 0.5;
  const [x0, y0] = [Math.floor(x), Math.floor(y)];
  const clamp = (i: number, count: number): number => Math.min(Math.max(i, 0), count - 1);
  const texel = (i: number, j: number, channel: number): number => {
    const code = codes[(clamp(j, extent.height) * extent.width + clamp(i, extent.width)) * 4 + channel];
    return channel === 3 ? code / 255 : decodeSrgb(code / 255);
  };
  const mix = (a: number, b: number, t: number): number => a + (b - a) * t;
  return [0, 1, 2, 3].map((channel) =>
    mix(
      mix(texel(x0, y0, channel), texel(x0 + 1, y0, channel), x - x0),
      mix(texel(x0, y0 + 1, channel), texel(x0 + 1, y0 + 1, channel), x - x0),
      y - y0,
    ),
  );
}
