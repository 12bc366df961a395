import type { IndexedRaster } from '../../../core/raster/raster.ts';
import { drawPixels, type Inks } from './pixels.ts';

/** Wick, the newt who keeps the halt, with his lantern. */
export const NEWT_INKS: Inks = [
  ['.', '#000000'],
  ['k', '#1c1a2b'],
  ['d', '#24513f'],
  ['g', '#3d8257'],
  ['l', '#7cc07a'],
  ['o', '#d9762e'],
  ['O', '#f6b65a'],
  ['w', '#fbf3d8'],
  ['r', '#b8304a'],
  ['R', '#ee6259'],
  ['m', '#4b5173'],
  ['y', '#ffe486'],
];

const ROWS = [
  '................',
  '....kkkkkk......',
  '...kllllggk.....',
  '..kllggggggkk...',
  '..klgggwkggggk..',
  '..kggggwkggggk..',
  '..kggggggggkkk..',
  '..kdgoOOOOOOk...',
  '.kRRRRrrrrrk....',
  'kRrkrrrgokkk....',
  'krk.kdgOOgggk...',
  '.k..kggOOkkkmk..',
  'kk.kdggOOokmmmk.',
  'kgkggdgOOokywyk.',
  '.kgggkgdkgkyyyk.',
  '..kkkkOOkOOkmk..',
];

export function paintNewt(): IndexedRaster {
  return drawPixels(ROWS, NEWT_INKS);
}
