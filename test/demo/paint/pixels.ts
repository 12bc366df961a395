import type { IndexedRaster } from '../../../core/raster/raster.ts';
import { hex } from './color.ts';

/** Letters of a drawing and the colors they stand for, in palette order; '.' is the transparent first entry. */
export type Inks = readonly (readonly [letter: string, color: string])[];

/** An indexed picture from rows of letters, all of one length. */
export function drawPixels(rows: readonly string[], inks: Inks): IndexedRaster {
  const width = rows[0].length;
  const letters = inks.map(([letter]) => letter);
  const indices = rows.flatMap((row, y) => {
    if (row.length !== width) throw new RangeError(`Expected ${width} letters in row ${y} but received ${row.length}`);
    return [...row].map((letter, x) => {
      const index = letters.indexOf(letter);
      if (index < 0) throw new RangeError(`Expected an ink at ${x}, ${y} but received ${letter}`);
      return index;
    });
  });
  return {
    kind: 'indexed',
    extent: { width, height: rows.length },
    indexBits: 4,
    indices: Uint8Array.from(indices),
    palette: Uint8Array.from(inks.flatMap(([letter, color]) => [...hex(color), letter === '.' ? 0 : 255])),
    alphaCount: 1,
  };
}
