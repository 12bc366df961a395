import { haloSide, type Picture, type SectionAnswer } from '../../../core/proof/want.ts';
import { maxCode } from '../../../core/raster/raster.ts';
import { channelAt } from '../prints/view.ts';
import { type Line, texelsAlong } from '../state/line.ts';
import { csvText } from './csv.ts';

/** Values of one channel along a line, in 8-bit codes; 16-bit codes are divided by 257. */
export interface Track {
  readonly name: string;
  readonly values: readonly number[];
  readonly selected: boolean;
  /** Where the print leaves the range of the source's texels that make it: above and below, as the engine measures halos. */
  readonly overshoots: readonly { readonly index: number; readonly side: 1 | -1 }[];
}

/** A cross-section: the source's track first, then one for each print. */
export interface Section {
  /** Null where the prints are made of another file. */
  readonly source: Track | null;
  readonly prints: readonly Track[];
}

export type Letter = 'r' | 'g' | 'b' | 'a';

export function sourceTrack(name: string, answer: SectionAnswer, letter: Letter): Track {
  const { channels, depth, codes } = answer;
  const at = channelAt(channels, letter);
  const unit = 255 / maxCode(depth);
  const values = Array.from({ length: codes.length / channels }, (_, i) =>
    at === null ? 255 : codes[i * channels + at] * unit,
  );
  return { name, values, selected: false, overshoots: [] };
}

/** `marks` are those of the print's halo. */
export function printTrack(
  print: Pick<Track, 'name' | 'selected'> & { readonly picture: Picture; readonly marks: Uint16Array | null },
  line: Line,
  letter: Letter,
): Track {
  const { name, selected, picture, marks } = print;
  const { channels, depth, codes, extent } = picture;
  const at = channelAt(channels, letter);
  const unit = 255 / maxCode(depth);
  const texels = texelsAlong(line, extent).map(({ x, y }) => y * extent.width + x);
  const values = texels.map((texel) => (at === null ? 255 : codes[texel * channels + at] * unit));
  const overshoots = texels.flatMap((texel, index) => {
    const side = marks === null || at === null ? 0 : haloSide(marks[texel], at);
    return side === 0 ? [] : [{ index, side }];
  });
  return { name, values, selected, overshoots };
}

/** The section as comma-separated values: a row for each print texel, the source's mean under it. */
export function sectionCsv(section: Section): string {
  const head = ['texel', ...sectionTracks(section).map(({ name }) => name)];
  return csvText([head, ...sectionRows(section).map((row) => row.map((value) => Number(value.toFixed(3))))]);
}

/** The source's track, where there is one, and the prints'. */
export function sectionTracks({ source, prints }: Section): readonly Track[] {
  return source === null ? prints : [source, ...prints];
}

/** Number of the texel along the line, mean of the source over it where there is one, and each print's value. */
export function sectionRows({ source, prints }: Section): readonly (readonly number[])[] {
  const length = Math.max(1, ...prints.map(({ values }) => values.length));
  const means = source === null ? null : meansOf(source, length);
  return Array.from({ length }, (_, i) => [
    i,
    ...(means === null ? [] : [means[i]]),
    ...prints.map(({ values }) => values[i] ?? Number.NaN),
  ]);
}

function meansOf({ values }: Track, length: number): readonly number[] {
  const ratio = values.length / length;
  return Array.from({ length }, (_, i) => {
    const first = Math.floor(i * ratio);
    const covered = values.slice(first, Math.max(first + 1, Math.floor((i + 1) * ratio)));
    return covered.reduce((sum, value) => sum + value, 0) / (covered.length || 1);
  });
}
