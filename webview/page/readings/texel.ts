import { decodeTable } from '../../../core/color/transfer.ts';
import { light } from '../../../core/figures.ts';
import { isCoded } from '../../../core/proof/sample.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { maxCode } from '../../../core/raster/raster.ts';

/** One texel of a print as numbers. */
export interface TexelReading {
  readonly name: string;
  readonly selected: boolean;
  readonly codes: readonly number[];
  /** Linear light, or shares of the largest code. */
  readonly linear: readonly number[];
  /** OKLab distance from the settings' print; null for itself, or where there is none yet. */
  readonly distance: number | null;
}

export function readTexel(picture: Picture, texel: number): Pick<TexelReading, 'codes' | 'linear'> {
  const { channels, codes, depth } = picture;
  const own = Array.from(codes.subarray(texel * channels, (texel + 1) * channels));
  const max = maxCode(depth);
  const linear = own.map((code, channel) =>
    isCoded(picture, channel) ? decodeTable(depth, 'srgb')[code] : code / max,
  );
  return { codes: own, linear };
}

/** The readings as text with tabs between, to be pasted anywhere. */
export function texelText(place: string, readings: readonly TexelReading[]): string {
  const lines = readings.map(({ name, codes, linear }) =>
    [name, codes.join(' '), linear.map(light).join(' ')].join('\t'),
  );
  return [place, ...lines].join('\n');
}
