import type { PrintImage } from '../../../core/proof/want.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import { t } from '../words/t.ts';
import { cursorTexel } from './line.ts';
import type { Model } from './model.ts';

/** A texel whose readings stay while the cursor goes on. It belongs to one image: on another level it is read there still. */
export interface Pin {
  readonly image: PrintImage;
  readonly x: number;
  readonly y: number;
}

/** Pins are told apart by one digit. */
export const MOST_PINS = 9;

/** A pin that the texture still has, with the number that it stands under and the extent of its image. */
export interface PlacedPin extends Pin {
  readonly number: number;
  readonly extent: Extent;
  /** The level or target, as the axis names it. */
  readonly name: string;
}

/** The pins whose image is there: a typed target may have been removed, and a file may have become smaller. */
export function pinsOf(model: Model): readonly PlacedPin[] {
  return model.state.pins.flatMap((pin, index) => {
    const place = placeOf(model, pin.image);
    if (place === null || pin.x >= place.extent.width || pin.y >= place.extent.height) return [];
    return [{ ...pin, ...place, number: index + 1 }];
  });
}

/** Pins of the image under the sight. */
export function pinsHere(model: Model): readonly PlacedPin[] {
  const here = keyOf(model.seen!.image);
  return pinsOf(model).filter(({ image }) => keyOf(image) === here);
}

/** Pins the texel at a point of the picture, or lets it go where it is pinned. */
export function togglePin(model: Model, cursor = model.state.cursor): void {
  const { image, extent } = model.seen!;
  const texel = cursorTexel(cursor, extent);
  const pinned = pinnedAt(model, texel);
  if (pinned !== null) letGo(model, pinned);
  else if (model.state.pins.length >= MOST_PINS) {
    model.say({ text: t('{count} texels are pinned; let one go first.', { count: MOST_PINS }), kind: 'failed' });
  } else model.set({ cursor, pins: [...model.state.pins, { image, ...texel }] });
}

/** Number of the pin on a texel of the image under the sight; null where none is. */
export function pinnedAt(model: Model, texel: { readonly x: number; readonly y: number }): number | null {
  return pinsHere(model).find(({ x, y }) => x === texel.x && y === texel.y)?.number ?? null;
}

export function letGo(model: Model, number: number): void {
  model.set({ pins: model.state.pins.filter((_, index) => index + 1 !== number) });
}

function placeOf(model: Model, image: PrintImage): Pick<PlacedPin, 'extent' | 'name'> | null {
  if ('lod' in image) {
    const last = model.stops.filter(({ kind }) => kind === 'level').length - 1;
    return image.lod > last ? null : { extent: image.extent, name: t('level {level}', { level: image.lod }) };
  }
  const stop = model.stops.find((each) => keyOf(each.image) === keyOf(image));
  if (stop === undefined) return null;
  const name = stop.kind === 'level' ? t('level {level}', { level: stop.label }) : stop.label;
  return { extent: stop.extent, name };
}

function keyOf(image: PrintImage): string {
  return JSON.stringify(image);
}
