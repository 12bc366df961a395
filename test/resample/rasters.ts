import fc from 'fast-check';
import type { ChannelCount, Depth, Extent, IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';

type Codes = readonly number[];

export function straight(width: number, channels: ChannelCount, codes: Codes, depth: Depth = 8): StraightRaster {
  const samples = depth === 8 ? Uint8Array.from(codes) : Uint16Array.from(codes);
  return {
    kind: 'straight',
    extent: { width, height: codes.length / channels / width },
    channels,
    depth,
    codes: samples,
  };
}

/** Four palette entries: red, green, clear with hidden blue, clear with hidden gray. */
export function indexed(width: number, indices: Codes): IndexedRaster {
  return {
    kind: 'indexed',
    extent: { width, height: indices.length / width },
    indexBits: 2,
    indices: Uint8Array.from(indices),
    palette: Uint8Array.of(255, 0, 0, 255, 0, 255, 0, 255, 0, 0, 255, 0, 128, 128, 128, 0),
    alphaCount: 4,
  };
}

/** Images of few colors, so that neighbors are often equal and votes often tie. Clear texels are all zeros unless
 *  they are to hide colors. */
export function pictures(limits: {
  readonly most: number;
  readonly clear?: 'hides colors';
}): fc.Arbitrary<StraightRaster> {
  const side = fc.integer({ min: 1, max: limits.most });
  const code = fc.constantFrom(0, 7, 200, 255);
  const channels = fc.constantFrom<ChannelCount>(1, 2, 3, 4);
  return fc.tuple(side, side, channels, fc.constantFrom<Depth>(8, 16)).chain(([width, height, count, depth]) => {
    const color = fc.array(code, { minLength: count, maxLength: count });
    const colors = fc.array(color, { minLength: 1, maxLength: 4 });
    return fc
      .tuple(colors, fc.array(fc.nat(3), { minLength: width * height, maxLength: width * height }))
      .map(([palette, choice]) => {
        const codes = choice.flatMap((index) => {
          const texel = palette[index % palette.length];
          const isClear = count % 2 === 0 && texel[count - 1] === 0;
          return isClear && limits.clear === undefined ? texel.map(() => 0) : texel;
        });
        return straight(width, count, codes, depth);
      });
  });
}

/** The raster with texel (x, y) taken from `from(x, y)`. */
function moved(raster: StraightRaster, extent: Extent, from: (x: number, y: number) => number): StraightRaster {
  const { channels, codes } = raster;
  const result: number[] = [];
  for (let y = 0; y < extent.height; y++) {
    for (let x = 0; x < extent.width; x++) {
      const texel = from(x, y);
      result.push(...codes.subarray(texel * channels, (texel + 1) * channels));
    }
  }
  return straight(extent.width, channels, result, raster.depth);
}

export function mirrored(raster: StraightRaster): StraightRaster {
  const { width } = raster.extent;
  return moved(raster, raster.extent, (x, y) => y * width + width - 1 - x);
}

/** Rows become columns. */
export function transposed(raster: StraightRaster): StraightRaster {
  const { width, height } = raster.extent;
  return moved(raster, { width: height, height: width }, (x, y) => x * width + y);
}

/** A quarter turn. */
export function turned(raster: StraightRaster): StraightRaster {
  return mirrored(transposed(raster));
}

/** 3x3 copies side by side. */
export function tiled(raster: StraightRaster): StraightRaster {
  const { width, height } = raster.extent;
  return moved(raster, { width: 3 * width, height: 3 * height }, (x, y) => (y % height) * width + (x % width));
}

/** A part of a raster. */
export function cut(raster: StraightRaster, left: number, top: number, extent: Extent): StraightRaster {
  return moved(raster, extent, (x, y) => (y + top) * raster.extent.width + x + left);
}

/** Each texel's codes as a word. */
export function words(raster: StraightRaster): string[] {
  const { channels, codes } = raster;
  return Array.from({ length: codes.length / channels }, (_, texel) =>
    codes.subarray(texel * channels, (texel + 1) * channels).join(),
  );
}
