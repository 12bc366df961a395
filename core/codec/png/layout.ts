import type { Extent } from '../../raster/raster.ts';
import { type PngHeader, STORED_SAMPLES } from './header.ts';

/** One sub-image of a PNG: its texels lie at (x + i dx, y + j dy) of the image. */
export interface Pass {
  readonly extent: Extent;
  readonly x: number;
  readonly y: number;
  readonly dx: number;
  readonly dy: number;
}

/** How the inflated image data is laid out: pass by pass, row by row, a filter byte before each row. */
export interface Layout {
  /** Those that hold texels. */
  readonly passes: readonly Pass[];
  readonly texelBits: number;
  /** Distance in bytes to the sample a filter predicts from. */
  readonly filterStep: number;
  /** Length of the inflated image data. */
  readonly byteCount: number;
}

export function layoutOf(header: PngHeader): Layout {
  const texelBits = STORED_SAMPLES[header.colorType] * header.bitDepth;
  const passes = header.interlaced ? interlacedPasses(header.extent) : [wholePass(header.extent)];
  const byteCount = passes.reduce(
    (sum, { extent }) => sum + extent.height * (1 + rowByteCount(extent.width, texelBits)),
    0,
  );
  return { passes, texelBits, filterStep: Math.max(1, texelBits / 8), byteCount };
}

/** Bytes of a row without its filter byte. Rows start on whole bytes. */
export function rowByteCount(width: number, texelBits: number): number {
  return Math.ceil((width * texelBits) / 8);
}

/** Start and step of the seven passes: x, y, dx, dy. [PNG3, 8.1 "Interlace methods"] */
const ADAM7: readonly (readonly [number, number, number, number])[] = [
  [0, 0, 8, 8],
  [4, 0, 8, 8],
  [0, 4, 4, 8],
  [2, 0, 4, 4],
  [0, 2, 2, 4],
  [1, 0, 2, 2],
  [0, 1, 1, 2],
];

function wholePass(extent: Extent): Pass {
  return { extent, x: 0, y: 0, dx: 1, dy: 1 };
}

/** A pass without texels has no rows and so no filter bytes. */
function interlacedPasses({ width, height }: Extent): readonly Pass[] {
  return ADAM7.map(([x, y, dx, dy]) => ({
    extent: { width: Math.ceil((width - x) / dx), height: Math.ceil((height - y) / dy) },
    x,
    y,
    dx,
    dy,
  })).filter(({ extent }) => extent.width > 0 && extent.height > 0);
}
