import type { StraightRaster } from '../../../core/raster/raster.ts';
import { ground } from './cobbles.ts';
import { normalAt, type Relief } from './relief.ts';

const SIZE = 256;

/** Height of the whole relief, in texels of this map: 26 of 512 in the painter's eye, as the color has it. */
const STEEPNESS = 13;

/** Tangent-space normals of the cobbles at half the color's extent; green points up the picture. */
export function paintCobblesNormal(): StraightRaster {
  const heights = new Float64Array(SIZE * SIZE);
  for (let texel = 0; texel < SIZE * SIZE; texel++) {
    heights[texel] = ground(((texel % SIZE) + 0.5) / SIZE, (Math.floor(texel / SIZE) + 0.5) / SIZE).height;
  }
  const relief: Relief = { size: SIZE, heights };
  const codes = new Uint8Array(SIZE * SIZE * 3);
  for (let texel = 0; texel < SIZE * SIZE; texel++) {
    const [x, down, z] = normalAt(relief, STEEPNESS, texel % SIZE, Math.floor(texel / SIZE));
    codes.set(
      [x, -down, z].map((part) => Math.round(127.5 + 127.5 * part)),
      texel * 3,
    );
  }
  return { kind: 'straight', extent: { width: SIZE, height: SIZE }, channels: 3, depth: 8, codes };
}
