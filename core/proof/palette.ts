import { expandIndexed, maxCode, type Raster, type StraightRaster } from '../raster/raster.ts';
import type { OffPalette, Picture } from './want.ts';

/** The colors that a source is painted with, each as RGBA in one integer; all of alpha 0 are one. Those of its palette where
 *  it has one, else those of its texels where they are few. Null where they are not, and for 16 bits: that is no palette. */
export function paletteOf(source: Raster): ReadonlySet<number> | null {
  if (source.kind === 'indexed') {
    const { palette } = source;
    const entries = {
      ...source,
      extent: { width: palette.length / 4, height: 1 },
      indices: everyEntry(palette.length / 4),
    };
    return new Set(colorsOf(expandIndexed(entries)));
  }
  if (source.depth !== 8) return null;
  const { width, height } = source.extent;
  const most = Math.min(FEW_COLORS, Math.floor((width * height) / TEXELS_A_COLOR));
  const found = new Set<number>();
  for (const color of colorsOf(source)) {
    found.add(color);
    if (found.size > most) return null;
  }
  return found;
}

/** More colors than this were not chosen one by one (common practice: palettes of pixel art hold 4 to 64). */
const FEW_COLORS = 64;

/** Fewer texels a color than this make any picture look like one of few colors. */
const TEXELS_A_COLOR = 4;

/** Visible texels of a print whose color the source's palette does not have. Null where codes cannot be compared: color
 *  multiplied by alpha, another depth, and numbers that are no color. */
export function offPaletteOf(print: Picture, palette: ReadonlySet<number> | null): OffPalette | null {
  const { meaning, depth, extent } = print;
  if (palette === null || meaning.premultiplied || depth !== 8 || !meaning.color) return null;
  const marks = new Uint8Array(extent.width * extent.height);
  const strangers = new Set<number>();
  let [texel, visible, off] = [0, 0, 0];
  for (const color of colorsOf(print)) {
    const at = texel++;
    if (color === CLEAR) continue;
    visible++;
    if (palette.has(color)) continue;
    off++;
    strangers.add(color);
    marks[at] = 1;
  }
  return { palette: palette.size, share: visible === 0 ? 0 : off / visible, colors: strangers.size, marks };
}

/** All colors of alpha 0. */
const CLEAR = 0;

/** Of every texel, row by row. */
function* colorsOf({
  channels,
  codes,
  depth,
}: Pick<StraightRaster, 'channels' | 'codes' | 'depth'>): Generator<number> {
  const opaque = maxCode(depth);
  const gray = channels < 3;
  for (let at = 0; at < codes.length; at += channels) {
    const alpha = channels % 2 === 0 ? codes[at + channels - 1] : opaque;
    const [green, blue] = gray ? [codes[at], codes[at]] : [codes[at + 1], codes[at + 2]];
    // Unsigned: a red of 128 and more reaches the sign.
    yield alpha === 0 ? CLEAR : ((codes[at] << 24) | (green << 16) | (blue << 8) | alpha) >>> 0;
  }
}

function everyEntry(count: number): Uint8Array {
  return Uint8Array.from({ length: count }, (_, entry) => entry);
}
