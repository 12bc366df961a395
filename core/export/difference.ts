import { oklabDistance, oklabOfLight } from '../color/oklab.ts';
import { decodeTable } from '../color/transfer.ts';
import { figure, light } from '../figures.ts';
import type { Picture } from '../proof/want.ts';
import { maxCode } from '../raster/raster.ts';
import type { Measured } from './measured.ts';

/** How far a print is from another of its extent: for color the mean and the largest OKLab distance, where what shows less by its
 *  alpha counts less; for numbers the largest difference of a code, in 8-bit codes. Empty for prints that cannot be compared. */
export function differenceOf(print: Picture, own: Picture): readonly Measured[] {
  if (print.codes.length !== own.codes.length || print.channels !== own.channels) return [];
  if (print.codes.every((code, at) => code === own.codes[at]))
    return [{ name: 'same as', text: 'settings', over: null }];
  return print.meaning.color && print.channels >= 3 ? [colorDifference(print, own)] : [codeDifference(print, own)];
}

/** What the measure is called on the sheet. */
export const COLOR_DIFFERENCE = 'OKLab from settings';

function colorDifference(print: Picture, own: Picture): Measured {
  const { channels, codes, meaning, depth } = print;
  const decode = decodeTable(depth, meaning.transfer);
  const unit = meaning.transfer === 'linear' ? maxCode(depth) : 1;
  const { alpha } = meaning;
  let total = 0;
  let most = 0;
  const lights = (picture: Picture, at: number): readonly [number, number, number] => {
    const a = alpha === null ? 1 : picture.codes[at + alpha] / maxCode(depth);
    const seen = (i: number): number => (decode[picture.codes[at + i]] / unit) * a + 0.5 * (1 - a);
    return [seen(0), seen(1), seen(2)];
  };
  for (let at = 0; at < codes.length; at += channels) {
    if (isSame(print, own, at)) continue;
    const distance = oklabDistance(oklabOfLight(...lights(print, at)), oklabOfLight(...lights(own, at)));
    total += distance;
    if (distance > most) most = distance;
  }
  const mean = total / (codes.length / channels);
  return { name: COLOR_DIFFERENCE, text: `${light(mean)} mean, ${light(most)} most`, over: null };
}

function codeDifference(print: Picture, own: Picture): Measured {
  let most = 0;
  for (let at = 0; at < print.codes.length; at++) most = Math.max(most, Math.abs(print.codes[at] - own.codes[at]));
  const codes = (most * 255) / maxCode(print.depth);
  return { name: 'from settings', text: `${figure(codes, 1)} codes at most`, over: null };
}

function isSame(print: Picture, own: Picture, at: number): boolean {
  for (let i = 0; i < print.channels; i++) if (print.codes[at + i] !== own.codes[at + i]) return false;
  return true;
}
