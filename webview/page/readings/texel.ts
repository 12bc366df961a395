import { decodeTable } from '../../../core/color/transfer.ts';
import { light } from '../../../core/figures.ts';
import { isCoded } from '../../../core/proof/sample.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { maxCode } from '../../../core/raster/raster.ts';
import { csvText } from './csv.ts';

/** One texel of a print as numbers. */
export interface TexelReading {
  readonly name: string;
  readonly selected: boolean;
  readonly codes: readonly number[];
  /** Linear light, or shares of the largest code. */
  readonly linear: readonly number[];
  /** OKLab distance from the settings' print; null for itself, or where there is none yet. */
  readonly distance: number | null;
  /** OKLab distance from what the same print has under the cursor; null there, and where that is not made yet. */
  readonly fromCursor: number | null;
}

/** A texel as every print has it: the one under the cursor, or one that is pinned. */
export interface TexelPlace {
  /** Number of the pin; null under the cursor. */
  readonly pin: number | null;
  /** The level or target that it is a texel of. */
  readonly image: string;
  readonly x: number;
  readonly y: number;
  readonly readings: readonly TexelReading[];
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

/** The readings as text with tabs between, to be pasted anywhere. `title` says in words where a place is. */
export function texelText(places: readonly TexelPlace[], title: (place: TexelPlace) => string): string {
  return places
    .flatMap((place) => [
      title(place),
      ...place.readings.map(({ name, codes, linear }) =>
        [name, codes.join(' '), linear.map(light).join(' ')].join('\t'),
      ),
    ])
    .join('\n');
}

/** The readings as comma-separated values: a row for each print at each place. */
export function texelCsv(places: readonly TexelPlace[]): string {
  const most = Math.max(0, ...places.flatMap(({ readings }) => readings.map(({ codes }) => codes.length)));
  const letters = ['', 'v', 'va', 'rgb', 'rgba'][most] ?? '';
  const head = ['pin', 'image', 'x', 'y', 'print', ...letters, ...[...letters].map((each) => `${each} linear`)];
  const rows = places.flatMap(({ pin, image, x, y, readings }) =>
    readings.map(({ name, codes, linear, distance, fromCursor }) => [
      pin ?? '',
      image,
      x,
      y,
      name,
      ...padded(codes, most),
      ...padded(
        linear.map((value) => Number(value.toFixed(6))),
        most,
      ),
      distance?.toFixed(4) ?? '',
      fromCursor?.toFixed(4) ?? '',
    ]),
  );
  return csvText([[...head, 'OKLab from settings', 'OKLab from cursor'], ...rows]);
}

function padded(values: readonly number[], count: number): readonly (number | string)[] {
  return Array.from({ length: count }, (_, i) => values[i] ?? '');
}
