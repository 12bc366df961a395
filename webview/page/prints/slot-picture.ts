import type { Slot } from '../../../core/proof/slot.ts';
import type { Picture, PrintImage } from '../../../core/proof/want.ts';
import { isProblem } from '../state/bench-link.ts';
import type { Model } from '../state/model.ts';
import { changeWords } from '../treatment/change-words.ts';

/** What a print holds at an image; null while it is not made. */
export function slotPicture(model: Model, slot: Slot, image: PrintImage): Picture | null {
  const told = model.print(model.treatmentOf(slot)!, image);
  return told === undefined || isProblem(told) ? null : told.picture;
}

/** A print's name in a table: its kernel, and what it changes. */
export function slotName(model: Model, slot: Slot): string {
  return [slotKernel(model, slot), ...changeWords(slot.change)].join(', ');
}

/** The kernel that makes a print at the sight. */
export function slotKernel(model: Model, slot: Slot): string {
  const { kernel } = model.treatmentOf(slot)!;
  return (slot.kernel ?? (model.seen!.lod < 0 ? kernel.magnify : kernel.minify)).name;
}
