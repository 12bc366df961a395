import { figure } from '../figures.ts';
import { defaultParams, findKernel } from '../kernel/table.ts';
import { type Change, OWN_SLOT, type Slot } from '../proof/slot.ts';
import type { Extent } from '../raster/raster.ts';
import type { KernelChoice, Treatment } from '../treatment/treatment.ts';

/** Prints to compare: the page's, or where it has none beside the settings' own a few kernels of different kinds that can make
 *  this image. */
export function comparedSlots(
  slots: readonly Slot[],
  treatment: Treatment,
  sizes: { readonly from: Extent; readonly to: Extent },
): readonly Slot[] {
  if (slots.length > 1) return slots.slice(0, MOST_PRINTS);
  const own = kernelOf(treatment, sizes).name;
  const magnifies = sizes.to.width > sizes.from.width;
  const others = USUAL.map((name) => findKernel(name)!)
    .filter((kernel) => kernel.name !== own && (magnifies ? kernel.magnifies : kernel.minifies))
    .slice(0, 3);
  return [
    OWN_SLOT,
    ...others.map((kernel, i): Slot => {
      return { id: i + 1, kernel: { name: kernel.name, params: defaultParams(kernel) }, change: {} };
    }),
  ];
}

/** More prints than this would make the sheet endless. */
export const MOST_PRINTS = 12;

/** One that averages, one that is soft, one that is sharp, one that moves codes. */
const USUAL = ['box', 'mitchell', 'lanczos3', 'nearest'] as const;

/** The kernel that makes an image of one size from another. */
export function kernelOf(
  { kernel }: Treatment,
  { from, to }: { readonly from: Extent; readonly to: Extent },
): KernelChoice {
  return to.width > from.width || to.height > from.height ? kernel.magnify : kernel.minify;
}

/** `alpha 4, width 3`; empty without parameters. */
export function paramWords({ params }: KernelChoice): string {
  return Object.entries(params)
    .map(([name, value]) => `${name} ${figure(value, 3)}`)
    .join(', ');
}

/** What a print changes against the settings. */
export function changeWords(change: Change): readonly string[] {
  const words: string[] = [];
  if (change.light !== undefined) words.push(change.light === 'code' ? 'in code space' : 'in linear light');
  if (change.weight !== undefined) words.push(change.weight ? 'weighed by alpha' : 'not weighed by alpha');
  if (change.wrap !== undefined) words.push(change.wrap);
  if (change.keepCoverage !== undefined) words.push(change.keepCoverage ? 'coverage kept' : 'coverage not kept');
  if (change.fill !== undefined) words.push(`fill ${change.fill}`);
  if (change.renormalise !== undefined) {
    words.push(change.renormalise ? 'level 0 renormalized' : 'level 0 as it is');
  }
  return words;
}
