import type { StraightRaster } from '../../../core/raster/raster.ts';
import { hash } from './chance.ts';
import { ground } from './cobbles.ts';
import { layers } from './noise.ts';
import { clamp, mix, smoothstep } from './shape.ts';

const SIZE = 256;

/** Perceptual roughness of the cobbles, one channel: wet soil shines, worn tops of stones are smooth, moss is dull. */
export function paintCobblesRoughness(): StraightRaster {
  const codes = new Uint8Array(SIZE * SIZE);
  for (let texel = 0; texel < SIZE * SIZE; texel++) {
    const u = ((texel % SIZE) + 0.5) / SIZE;
    const v = (Math.floor(texel / SIZE) + 0.5) / SIZE;
    const { height, stone, moss, soil, rim } = ground(u, v);
    const grain = layers({ seed: 401, period: 40, count: 3 }, u, v) - 0.5;
    const worn = smoothstep(8, 26, rim) * smoothstep(0.5, 0.9, height);
    const stony = 0.78 - 0.26 * worn - 0.14 * hash(402, stone) + 0.2 * grain;
    const wet = smoothstep(0.42, 0.6, layers({ seed: 403, period: 6, count: 3 }, u, v));
    const earthy = mix(0.85, 0.28, wet) + 0.14 * grain;
    const rough = mix(mix(stony, earthy, soil), 0.93 + 0.1 * grain, moss);
    codes[texel] = Math.round(255 * clamp(rough));
  }
  return { kind: 'straight', extent: { width: SIZE, height: SIZE }, channels: 1, depth: 8, codes };
}
