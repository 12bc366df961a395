import { holdsColor } from '../chain/layout.ts';
import type { ChainPlan } from '../chain/plan.ts';
import { expandIndexed, type Raster } from '../raster/raster.ts';
import type { Layout } from '../resample/encoding.ts';
import type { Meaning, Picture } from './want.ts';

/** A raster of a chain as a proof shows it. The codes are the raster's own where it has no palette. */
export function pictureOf(plan: ChainPlan, raster: Raster): Picture {
  const whole = raster.kind === 'indexed' ? expandIndexed(raster) : raster;
  const { extent, channels, depth, codes } = whole;
  const meaning = meaningOf(plan.layout, whole.kind === 'premultiplied' ? 'premultiplied' : 'straight');
  // A cell adds an alpha that the source lacks.
  const alpha = meaning.alpha ?? (channels > plan.layout.channels ? channels - 1 : null);
  return { extent, channels, depth, codes, meaning: { ...meaning, alpha } };
}

/** A copy whose codes may be given away. */
export function copyPicture(picture: Picture): Picture {
  return { ...picture, codes: picture.codes.slice() };
}

/** The rectangle of at most `side` texels a side in the middle of a picture. */
export function cutMiddle(picture: Picture, side: number): Picture {
  const { channels, codes } = picture;
  const { width, height } = picture.extent;
  const extent = { width: Math.min(side, width), height: Math.min(side, height) };
  const left = Math.floor((width - extent.width) / 2);
  const top = Math.floor((height - extent.height) / 2);
  const cut = new (codes.constructor as Uint8ArrayConstructor)(extent.width * extent.height * channels);
  for (let y = 0; y < extent.height; y++) {
    const start = ((top + y) * width + left) * channels;
    cut.set(codes.subarray(start, start + extent.width * channels), y * extent.width * channels);
  }
  return { ...picture, extent, codes: cut };
}

function meaningOf(layout: Layout, store: 'straight' | 'premultiplied'): Meaning {
  const [front] = layout.roles;
  const [normal = null] = layout.normals;
  return {
    transfer: front.kind === 'color' ? front.stored : 'linear',
    color: holdsColor(layout),
    alpha: layout.alpha,
    premultiplied: store === 'premultiplied',
    normal: normal && { x: normal.x, y: normal.y, z: normal.rebuilt ? null : normal.z },
  };
}
