import type { Extent } from '../raster/raster.ts';

/** sRGB codes. */
export type Rgb = readonly [red: number, green: number, blue: number];

export interface Box {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
}

/** A picture that is drawn on: RGB codes of 8 bits. What lies outside is not drawn. */
export class Canvas {
  readonly extent: Extent;
  readonly codes: Uint8Array;
  /** What was written where, in order. */
  readonly texts: { readonly text: string; readonly box: Box }[] = [];

  constructor(extent: Extent, ground: Rgb) {
    this.extent = extent;
    this.codes = new Uint8Array(extent.width * extent.height * 3);
    this.fill({ left: 0, top: 0, ...extent }, ground);
  }

  fill(box: Box, color: Rgb): void {
    const left = Math.max(0, box.left);
    const right = Math.min(this.extent.width, box.left + box.width);
    for (let y = Math.max(0, box.top); y < Math.min(this.extent.height, box.top + box.height); y++) {
      for (let x = left; x < right; x++) this.#put(y * this.extent.width + x, color);
    }
  }

  /** A line of one pixel round the box, inside it. */
  frame({ left, top, width, height }: Box, color: Rgb): void {
    this.fill({ left, top, width, height: 1 }, color);
    this.fill({ left, top: top + height - 1, width, height: 1 }, color);
    this.fill({ left, top, width: 1, height }, color);
    this.fill({ left: left + width - 1, top, width: 1, height }, color);
  }

  dot(x: number, y: number, color: Rgb): void {
    if (x < 0 || y < 0 || x >= this.extent.width || y >= this.extent.height) return;
    this.#put(y * this.extent.width + x, color);
  }

  #put(pixel: number, color: Rgb): void {
    this.codes[pixel * 3] = color[0];
    this.codes[pixel * 3 + 1] = color[1];
    this.codes[pixel * 3 + 2] = color[2];
  }
}
