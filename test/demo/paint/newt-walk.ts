import type { IndexedRaster } from '../../../core/raster/raster.ts';
import { NEWT_INKS } from './newt.ts';
import { drawPixels } from './pixels.ts';

// Wick walks: a step with the near foot, his weight over it, a step with the far foot, his weight over that.
const FRAMES = [
  [
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
    '.kgkddkkggkyyyk.',
    '..kkook.kOOkmk..',
  ],
  [
    '....kkkkkk......',
    '...kllllggk.....',
    '..kllggggggkk...',
    '..klgggwkggggk..',
    '..kggggwkggggk..',
    '..kggggggggkkk..',
    '..kdgoOOOOOOk...',
    '.kRRRRrrrrrk....',
    'krrrkrrgokkk....',
    '.kkkkdgOOgggk...',
    '....kggOOkkkmk..',
    '...kdggOOokmmmk.',
    'kkkggdgOOokywyk.',
    'kggggdggokkyyyk.',
    '.kkkkoggkk.kmk..',
    '.....kkOOk......',
  ],
  [
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
    '.kgkggkkddkyyyk.',
    '..kkOOk.kookmk..',
  ],
  [
    '....kkkkkk......',
    '...kllllggk.....',
    '..kllggggggkk...',
    '..klgggwkggggk..',
    '..kggggwkggggk..',
    '..kggggggggkkk..',
    '..kdgoOOOOOOk...',
    '.kRRRRrrrrrk....',
    'krrrkrrgokkk....',
    '.kkkkdgOOgggk...',
    '....kggOOkkkmk..',
    '...kdggOOokmmmk.',
    'kkkggdgOOokywyk.',
    'kggggdgdokkyyyk.',
    '.kkkOkgdkk.kmk..',
    '....kkkook......',
  ],
];

/** The walk as a sheet: frames of 16x16 in a row, from left to right. */
export function paintNewtWalk(): IndexedRaster {
  const rows = FRAMES[0].map((_, y) => FRAMES.map((frame) => frame[y]).join(''));
  return drawPixels(rows, NEWT_INKS);
}
