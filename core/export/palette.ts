import type { Rgb } from './canvas.ts';
import type { ProofPreferences } from './order.ts';
import type { Style } from './text.ts';

// The colors of the sheet. What pictures stand on is a gray without hue, so that it tints none of them.

export const GROUND: Rgb = [38, 38, 38];
export const BAND: Rgb = [29, 58, 60];
const INK: Rgb = [236, 236, 236];
const QUIET: Rgb = [170, 170, 170];
export const RAIL: Rgb = [206, 214, 206];
export const LINE: Rgb = [76, 76, 76];
/** The sight, and whatever passes its limit; each has a shape or a word of its own beside the color. */
export const AMBER: Rgb = [238, 164, 72];

export const TITLE: Style = { scale: 3, weight: 'bold', color: INK };
export const HEADING: Style = { scale: 2, weight: 'bold', color: INK };
export const FACT: Style = { scale: 2, weight: 'plain', color: INK };
export const LABEL: Style = { scale: 1, weight: 'bold', color: INK };
export const PLAIN: Style = { scale: 1, weight: 'plain', color: INK };
export const SOFT: Style = { scale: 1, weight: 'plain', color: QUIET };
export const SOFT_FACT: Style = { scale: 2, weight: 'plain', color: QUIET };
export const WARNING: Style = { scale: 1, weight: 'bold', color: AMBER };

/** One color, or the two of a checker: those of the proof's page. */
export const BACKDROPS: Readonly<Record<ProofPreferences['backdrop'], readonly Rgb[]>> = {
  checker: [
    [142, 142, 142],
    [102, 102, 102],
  ],
  black: [[0, 0, 0]],
  white: [[255, 255, 255]],
  // Half of the light of white.
  gray: [[188, 188, 188]],
};

/** What the backdrops are called on the sheet, with their codes. */
export const BACKDROP_WORDS: Readonly<Record<ProofPreferences['backdrop'], string>> = {
  checker: 'a checker of two grays (codes 142 and 102)',
  black: 'black',
  white: 'white',
  gray: 'a gray of half the light of white (code 188)',
};

/** Pixels of a checker's square. */
export const CHECKER_SIDE = 8;
