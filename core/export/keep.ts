import { decodeImage } from '../codec/decode.ts';
import { openImage } from '../codec/open.ts';
import { encodePng } from '../codec/png/encode.ts';
import { extentText } from '../figures.ts';
import type { Inflate } from '../port.ts';
import type { IndexedRaster, StraightRaster } from '../raster/raster.ts';
import type { Treatment } from '../treatment/treatment.ts';
import type { Box } from './canvas.ts';
import { sameDeflate } from './deflate.ts';
import { type ProofOrder, SOURCE_LIMIT } from './order.ts';

/** Bytes of source that an order carries. */
export function sourceBytes({ image, roughness }: ProofOrder): number {
  return image.length + (roughness?.length ?? 0);
}

/** Whether a page asks what to keep. */
export function isLarge(order: ProofOrder): boolean {
  return sourceBytes(order) > SOURCE_LIMIT;
}

/** The order with the middle of its source in place of all of it, as PNG, and a remark that says so. The part begins at whole
 *  cells of a grid, and otherwise where eight levels begin a texel, so that its levels lie as those of the whole do. A
 *  roughness map is cut likewise. Throws Refusal for a damaged source. */
export async function keepMiddle(order: ProofOrder, inflate: Inflate): Promise<ProofOrder> {
  const { treatment } = order.settings;
  const image = await middleOf(order.image, order.name, treatment, inflate);
  const roughness = order.roughness === null ? null : await middleOf(order.roughness, '.tga', treatment, inflate);
  const { box, whole } = image;
  const remark = `Only the middle ${extentText(box)} of ${extentText(whole)} texels is in this page, from texel ${box.left}, ${box.top} on; all numbers are of this part.`;
  return { ...order, image: image.bytes, roughness: roughness?.bytes ?? null, remark };
}

/** Most texels a side that the middle has: at 4 channels of 16 bits that is less than 50 MB. */
const MOST_SIDE = 2048;

/** Texels of level 0 that make one of level 8. */
const UNIT = 256;

async function middleOf(bytes: Uint8Array, name: string, treatment: Treatment, inflate: Inflate) {
  const raster = await decodeImage(openImage(bytes, name, inflate));
  const { width, height } = raster.extent;
  const [unitX, unitY] = [0, 1].map((axis) =>
    treatment.grid === null ? UNIT : treatment.grid.cell[axis] + 2 * treatment.grid.gutter,
  );
  const across = spanOf(width, unitX);
  const down = spanOf(height, unitY);
  const box = { left: across.start, top: down.start, width: across.count, height: down.count };
  return { box, whole: raster.extent, bytes: await encodePng(cropped(raster, box), sameDeflate) };
}

/** Whole units in the middle of an axis; all of it where it is short. */
function spanOf(texels: number, unit: number): { readonly start: number; readonly count: number } {
  if (texels <= MOST_SIDE) return { start: 0, count: texels };
  const count = Math.max(unit, Math.floor(MOST_SIDE / unit) * unit);
  return { start: Math.floor((texels - count) / 2 / unit) * unit, count };
}

function cropped<R extends StraightRaster | IndexedRaster>(raster: R, box: Box): R {
  const extent = { width: box.width, height: box.height };
  const cut = <S extends Uint8Array | Uint16Array>(samples: S, channels: number): S => {
    const out = samples.slice(0, box.width * box.height * channels) as S;
    for (let y = 0; y < box.height; y++) {
      const start = ((box.top + y) * raster.extent.width + box.left) * channels;
      out.set(samples.subarray(start, start + box.width * channels), y * box.width * channels);
    }
    return out;
  };
  if (raster.kind === 'indexed') return { ...raster, extent, indices: cut(raster.indices, 1) };
  return { ...raster, extent, codes: cut(raster.codes, raster.channels) };
}
