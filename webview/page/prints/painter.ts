import type { Wrap } from '../../../core/kernel/wrap.ts';
import { bilinearSampler, isCoded } from '../../../core/proof/sample.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { type Extent, newCodes } from '../../../core/raster/raster.ts';
import type { Backdrop } from '../state/state.ts';
import { BACKDROPS, CHECKER_SIDE, type Rgb } from './backdrop.ts';
import { type Placement, type Span, visibleSpan } from './frame.ts';
import { codeOfLight } from './texel.ts';
import { type Shader, shaderOf, showsBackdrop, type View } from './view.ts';

/** A picture to paint into a frame, stretched over the whole of what the placement places. */
export interface Layer {
  readonly picture: Picture;
  readonly reference: Picture | null;
  /** Part of the frame in device pixels that it may cover. */
  readonly clip: { readonly left: number; readonly right: number };
}

export interface Painting {
  /** Painted in order. */
  readonly layers: readonly Layer[];
  /** Extent that the placement speaks of. */
  readonly extent: Extent;
  readonly placement: Placement;
  readonly view: View;
  readonly backdrop: Backdrop;
  readonly magnify: 'nearest' | 'bilinear';
  readonly wrap: { readonly x: Wrap; readonly y: Wrap };
  /** 1, or 3 for a picture among eight of its like. */
  readonly tiles: 1 | 3;
  /** Device pixels a CSS pixel. */
  readonly ratio: number;
}

/** Paints pictures into a canvas, a slice of time at a time, so that the page stays free; a painting is seen when it is whole. A
 *  new one replaces one that is still being made. */
export class Painter {
  readonly #canvas: HTMLCanvasElement;
  #turn = 0;

  constructor(canvas: HTMLCanvasElement) {
    this.#canvas = canvas;
  }

  /** Resolves to whether the painting came to be seen. */
  async paint(painting: Painting): Promise<boolean> {
    const turn = ++this.#turn;
    const frame: Extent = { width: this.#canvas.width, height: this.#canvas.height };
    const sheets: Sheet[] = [];
    for (const layer of painting.layers) {
      const sheet = sheetOf(layer, painting, frame);
      if (sheet === null) continue;
      sheets.push(sheet);
      for (let row = 0; row < sheet.rows.count; row++) {
        if (!slice.holds()) {
          await nextTurn();
          if (turn !== this.#turn) return false;
          slice.begin();
        }
        sheet.shadeRow(row);
      }
    }
    this.#show(painting, sheets, frame);
    return true;
  }

  #show(painting: Painting, sheets: readonly Sheet[], frame: Extent): void {
    const context = this.#canvas.getContext('2d', { colorSpace: 'srgb' });
    if (context === null) return;
    context.clearRect(0, 0, frame.width, frame.height);
    context.imageSmoothingEnabled = false;
    for (const sheet of sheets) {
      const [first, second] = sheet.images;
      context.save();
      clipTo(context, [[sheet.clip.left, 0, sheet.clip.right - sheet.clip.left, frame.height]]);
      draw(context, first, sheet.box);
      if (second !== undefined) {
        clipTo(context, checkerSquares(frame, Math.max(1, Math.round(CHECKER_SIDE * painting.ratio))));
        draw(context, second, sheet.box);
      }
      context.restore();
    }
  }
}

/** Longest that one turn of painting holds the page's thread, in milliseconds, whoever paints: prints stand side by side. */
const SLICE_MS = 9;

/** The slice of time of all painters. */
const slice = {
  end: 0,
  /** Whether there is time left. Long after the last slice ended another turn has come, with a slice of its own. */
  holds(): boolean {
    const now = performance.now();
    if (now > this.end + SLICE_MS) this.end = now + SLICE_MS;
    return now < this.end;
  },
  begin(): void {
    this.end = performance.now() + SLICE_MS;
  },
};

/** A turn of the event loop, in which the page can answer the hand and draw. */
function nextTurn(): Promise<void> {
  const { scheduler } = globalThis as { readonly scheduler?: { yield?(): Promise<void> } };
  // Timers wait 4 ms once they are nested. Browsers that have nothing better may show an exported page.
  return scheduler?.yield?.() ?? new Promise((resolve) => setTimeout(resolve, 0));
}

type Box = readonly [left: number, top: number, width: number, height: number];

/** The visible part of a layer: one image for each color of the backdrop. */
interface Sheet {
  readonly rows: Span;
  readonly images: readonly ImageData[];
  readonly box: Box;
  readonly clip: Layer['clip'];
  shadeRow(row: number): void;
}

function sheetOf(layer: Layer, painting: Painting, frame: Extent): Sheet | null {
  const { picture } = layer;
  const { placement, extent, tiles, view } = painting;
  const smooth = painting.magnify === 'bilinear' && view.show !== 'difference' && placement.zoom > 1;
  const { width, height } = picture.extent;
  const [zoomX, zoomY] = smooth
    ? [1, 1]
    : [(placement.zoom * extent.width) / width, (placement.zoom * extent.height) / height];
  const [across, down] = smooth ? [extent.width * placement.zoom, extent.height * placement.zoom] : [width, height];
  const [low, high] = tiles === 3 ? [-1, 2] : [0, 1];
  const columns = visibleSpan(placement.left, zoomX, frame.width, low * across, high * across);
  const rows = visibleSpan(placement.top, zoomY, frame.height, low * down, high * down);
  if (columns.count === 0 || rows.count === 0) return null;
  const backdrops = BACKDROPS[painting.backdrop];
  const used = showsBackdrop(view.show, picture) ? backdrops : backdrops.slice(0, 1);
  const images = used.map(() => new ImageData(columns.count, rows.count));
  const box: Box = [
    placement.left + columns.first * zoomX,
    placement.top + rows.first * zoomY,
    columns.count * zoomX,
    rows.count * zoomY,
  ];
  const row = smooth ? sampledRow(picture, painting, columns, across, down) : storedRow(picture, layer, view, columns);
  return {
    rows,
    images,
    box,
    clip: layer.clip,
    shadeRow: (index) => {
      for (const [i, image] of images.entries()) row(rows.first + index, index, used[i], image);
    },
  };
}

type RowShader = (y: number, index: number, backdrop: Rgb, image: ImageData) => void;

/** Stored texels, each one pixel of the image. */
function storedRow(picture: Picture, layer: Layer, view: View, columns: Span): RowShader {
  if (isCopied(view.show, picture)) return copiedRow(picture, columns);
  const shade = shaderOf(view, picture, sameExtent(picture, layer.reference));
  const { width, height } = picture.extent;
  return (y, index, backdrop, image) => {
    const start = wrapped(y, height) * width;
    fillRow(image, index, columns, backdrop, shade, (x) => start + wrapped(x, width));
  };
}

/** Whether the screen shows the codes as they are. */
function isCopied(show: View['show'], { channels, depth, meaning }: Picture): boolean {
  return channels === 3 && depth === 8 && (show === 'bare' || (show === 'color' && meaning.alpha === null));
}

/** What `storedRow` makes of most pictures, without a call a texel: a fifth of the time. */
function copiedRow({ codes, extent: { width, height } }: Picture, columns: Span): RowShader {
  return (y, index, _, { data }) => {
    const start = wrapped(y, height) * width;
    let x = wrapped(columns.first, width);
    let at = index * columns.count * 4;
    for (let i = 0; i < columns.count; i++, at += 4) {
      const from = (start + x) * 3;
      if (++x === width) x = 0;
      data[at] = codes[from];
      data[at + 1] = codes[from + 1];
      data[at + 2] = codes[from + 2];
      data[at + 3] = 255;
    }
  };
}

/** Device pixels, each sampled between stored texels as a GPU does when it magnifies. */
function sampledRow(picture: Picture, painting: Painting, columns: Span, across: number, down: number): RowShader {
  const { channels, depth } = picture;
  const sample = bilinearSampler(picture, painting.wrap);
  const values = new Float64Array(channels);
  const codes = newCodes(8, columns.count * channels);
  const line: Picture = { ...picture, depth: 8, extent: { width: columns.count, height: 1 }, codes };
  const coded = Array.from({ length: channels }, (_, channel) => isCoded(picture, channel));
  const passing = depth === 8 ? painting.view.passing : Math.ceil(painting.view.passing / 257);
  const shade = shaderOf({ ...painting.view, passing }, line, null);
  let made = Number.NaN;
  const make = (y: number): void => {
    for (let i = 0, at = 0; i < columns.count; i++) {
      sample((wrapped(columns.first + i, across) + 0.5) / across, (wrapped(y, down) + 0.5) / down, values);
      for (let channel = 0; channel < channels; channel++) {
        codes[at++] = coded[channel] ? codeOfLight(values[channel]) : Math.round(values[channel] * 255);
      }
    }
    made = y;
  };
  return (y, index, backdrop, image) => {
    if (made !== y) make(y);
    fillRow(image, index, columns, backdrop, shade, (x) => x - columns.first);
  };
}

function fillRow(
  image: ImageData,
  index: number,
  columns: Span,
  backdrop: Rgb,
  shade: Shader,
  texelOf: (x: number) => number,
): void {
  const { data } = image;
  const out = [0, 0, 0];
  let at = index * columns.count * 4;
  for (let i = 0; i < columns.count; i++, at += 4) {
    shade(texelOf(columns.first + i), backdrop, out);
    data[at] = out[0];
    data[at + 1] = out[1];
    data[at + 2] = out[2];
    data[at + 3] = 255;
  }
}

function sameExtent(picture: Picture, reference: Picture | null): Picture | null {
  if (reference === null) return null;
  const { width, height } = picture.extent;
  return reference.extent.width === width && reference.extent.height === height ? reference : null;
}

function wrapped(index: number, count: number): number {
  return index - count * Math.floor(index / count);
}

function draw(context: CanvasRenderingContext2D, image: ImageData, [left, top, width, height]: Box): void {
  const scratch = new OffscreenCanvas(image.width, image.height);
  scratch.getContext('2d')!.putImageData(image, 0, 0);
  context.drawImage(scratch, 0, 0, image.width, image.height, left, top, width, height);
}

function clipTo(context: CanvasRenderingContext2D, boxes: readonly Box[]): void {
  context.beginPath();
  for (const [left, top, width, height] of boxes) context.rect(left, top, width, height);
  context.clip();
}

/** Every other square of a board over the frame. */
function checkerSquares(frame: Extent, side: number): readonly Box[] {
  const boxes: Box[] = [];
  for (let row = 0; row * side < frame.height; row++) {
    for (let column = row % 2; column * side < frame.width; column += 2) {
      boxes.push([column * side, row * side, side, side]);
    }
  }
  return boxes;
}
