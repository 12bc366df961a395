import { levelExtent } from '../../../core/chain/levels.ts';
import type { Want } from '../../../core/proof/want.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { cursorTexel, lineOf } from './line.ts';
import type { Model } from './model.ts';
import { pinsOf } from './pin.ts';

/** What the page needs to show its state, most urgent first: the selected print, the others, hashes, the axis, then
 *  measurements. */
export function wantsOf(model: Model): readonly Want[] {
  const { state, seen, treatment, base } = model;
  if (seen === null || treatment === null || base === null) return [];
  const { image } = seen;
  const print = (each: Treatment): Want => model.printWant(each, image);
  const slots = [...state.slots].sort((one, other) => rank(one.id, state.selected) - rank(other.id, state.selected));
  const treatments = slots.map((slot) => model.treatmentOf(slot)!);
  const wants: Want[] = treatments.map(print);
  const comparing = state.compare !== 'beside' && state.partner === 'source';
  if (comparing || (model.show === 'difference' && state.against === 'source')) {
    const source = model.sourcePrint(image);
    if (source !== null) wants.push(print(source.treatment));
  }
  const first = model.takeover.wanted(treatment);
  if (first !== null) wants.push(first);
  const own = model.treatmentOf(model.slot)!;
  wants.push({ kind: 'footprint', treatment: own, image, ...cursorTexel(state.cursor, seen.extent) });
  wants.push({ kind: 'section', ...lineOf(state, seen.extent) });
  if (!('lod' in image)) for (const each of treatments) wants.push(model.pixelsWant(each, image));
  wants.push({ kind: 'levels', treatment });
  // What is measured of an image says nothing of what is written beside it.
  if (!('lod' in image) && model.outputAt(image) === 'image') {
    for (const each of treatments) wants.push({ kind: 'art', treatment: each, image });
    for (const each of treatments) wants.push({ kind: 'halo', treatment: each, image });
  }
  for (const pin of pinsOf(model)) {
    for (const each of treatments) wants.push(model.printWant(each, pin.image));
  }
  for (const stop of model.stops) {
    if (stop.kind !== 'level' && Math.max(stop.extent.width, stop.extent.height) <= THUMB_SIDE) {
      wants.push({ kind: 'print', treatment, image: stop.image });
    }
  }
  // Neighbors on the axis, so that a step of the sight shows at once.
  if ('level' in image) {
    for (const level of [image.level + 1, image.level - 1]) {
      if (level < 0 || level > lastLevel(model) || isLarge(base, level)) continue;
      for (const each of treatments) wants.push(model.printWant(each, { level }));
    }
  }
  return wants;
}

/** Targets up to this side stand on the axis as they are. */
export const THUMB_SIDE = 512;

function rank(id: number, selected: number): number {
  return id === selected ? -1 : id;
}

function lastLevel(model: Model): number {
  return model.stops.filter((stop) => stop.kind === 'level').length - 1;
}

/** Prints of more than a million texels are only moved to the page when they are looked at. */
function isLarge(base: { readonly width: number; readonly height: number }, level: number): boolean {
  const { width, height } = levelExtent(base, level);
  return width * height > 1 << 20;
}
