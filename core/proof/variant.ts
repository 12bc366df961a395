import { findKernel } from '../kernel/table.ts';
import { defaultDerive } from '../treatment/defaults.ts';
import type { KernelChoice, Treatment } from '../treatment/treatment.ts';
import type { PrintImage } from './want.ts';

/** The treatment with another kernel, in the directions that it can be used in. `derive` is kept where the settings name it,
 *  and otherwise follows the kernel as it does there. */
export function withKernel(treatment: Treatment, choice: KernelChoice, derive: 'kept' | 'default'): Treatment {
  const kernel = findKernel(choice.name);
  if (kernel === undefined) throw new RangeError(`Expected a kernel of the table but received ${choice.name}`);
  const minify = kernel.minifies ? choice : treatment.kernel.minify;
  return {
    ...treatment,
    kernel: { minify, magnify: kernel.magnifies ? choice : treatment.kernel.magnify },
    derive: derive === 'kept' ? treatment.derive : defaultDerive(minify),
  };
}

/** The treatment that makes this image and no more than it needs: a whole chain for levels, one target from level 0. What is
 *  shipped beside an image changes nothing in it. */
export function treatmentFor(treatment: Treatment, image: PrintImage): Treatment {
  if ('target' in image) return { ...treatment, levels: 'none', targets: [image.target] };
  return { ...treatment, levels: { first: 0, last: null }, targets: [] };
}
