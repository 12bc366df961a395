import type { Picture, SectionAnswer } from '../../../core/proof/want.ts';
import { maxCode } from '../../../core/raster/raster.ts';
import { channelAt } from '../prints/view.ts';
import { type Line, texelsAlong } from './line.ts';

/** Values of one channel along a line, in 8-bit codes; 16-bit codes are divided by 257. */
export interface Track {
  readonly name: string;
  readonly values: readonly number[];
  readonly selected: boolean;
}

/** A cross-section: the source's track first, then one for each print. */
export interface Section {
  readonly source: Track;
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
  return { name, values, selected: false };
}

export function printTrack(name: string, picture: Picture, line: Line, letter: Letter, selected: boolean): Track {
  const { channels, depth, codes, extent } = picture;
  const at = channelAt(channels, letter);
  const unit = 255 / maxCode(depth);
  const values = texelsAlong(line, extent).map(({ x, y }) =>
    at === null ? 255 : codes[(y * extent.width + x) * channels + at] * unit,
  );
  return { name, values, selected };
}

/** Where a print leaves the range of the source around it: the texels of the source that it covers, and one print texel more on
 *  each side. `beyond` is in 8-bit codes, negative below. Half a code is rounding. */
export function overshootsOf(
  source: Track,
  print: Track,
): readonly { readonly index: number; readonly beyond: number }[] {
  const found: { index: number; beyond: number }[] = [];
  const ratio = source.values.length / print.values.length;
  print.values.forEach((value, index) => {
    const first = Math.max(0, Math.floor((index - 1) * ratio));
    const last = Math.min(source.values.length, Math.ceil((index + 2) * ratio));
    let [low, high] = [255, 0];
    for (let i = first; i < last; i++) {
      low = Math.min(low, source.values[i]);
      high = Math.max(high, source.values[i]);
    }
    if (value > high + 0.5) found.push({ index, beyond: value - high });
    else if (value < low - 0.5) found.push({ index, beyond: value - low });
  });
  return found;
}

/** The section as comma-separated values: a row for each print texel, the source's mean under it. */
export function sectionCsv(section: Section): string {
  const rows = sectionRows(section);
  const quoted = (text: string): string => (/[",\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);
  const head = ['texel', section.source.name, ...section.prints.map(({ name }) => name)].map(quoted).join(',');
  return [head, ...rows.map((row) => row.map((value) => String(Number(value.toFixed(3)))).join(','))].join('\n');
}

/** Number of the texel along the line, mean of the source over it, and each print's value. */
export function sectionRows({ source, prints }: Section): readonly (readonly number[])[] {
  const length = Math.max(1, ...prints.map(({ values }) => values.length));
  const ratio = source.values.length / length;
  return Array.from({ length }, (_, i) => {
    const first = Math.floor(i * ratio);
    const covered = source.values.slice(first, Math.max(first + 1, Math.floor((i + 1) * ratio)));
    const mean = covered.reduce((sum, value) => sum + value, 0) / (covered.length || 1);
    return [i, mean, ...prints.map(({ values }) => values[i] ?? Number.NaN)];
  });
}
