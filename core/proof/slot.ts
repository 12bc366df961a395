import type { Wrap } from '../kernel/wrap.ts';
import type { KernelChoice, Origin, Treatment } from '../treatment/treatment.ts';
import { withKernel } from './variant.ts';

/** Where the sight stands: at a level, at a target, or between levels. */
export type Sight =
  | { readonly kind: 'level'; readonly level: number }
  | { readonly kind: 'target'; readonly name: string }
  | { readonly kind: 'lod'; readonly lod: number };

/** What a print tries against the settings; a key that is left out is as they say. */
export interface Change {
  readonly light?: 'linear' | 'code';
  readonly weight?: boolean;
  readonly wrap?: Wrap;
  readonly keepCoverage?: boolean;
  readonly fill?: 'none' | 'hidden' | 'all';
  readonly renormalise?: boolean;
}

/** One print of the row. The first is the settings' own: no kernel, no change. */
export interface Slot {
  readonly id: number;
  readonly kernel: KernelChoice | null;
  readonly change: Change;
}

/** The settings' own print. */
export const OWN_SLOT: Slot = { id: 0, kernel: null, change: {} };

/** Of the state that a page keeps. Raised when it changes its shape. */
export const STATE_VERSION = 1;

/** The treatment that a print is made with. */
export function treatmentOf(slot: Slot, settings: Treatment, origins: readonly Origin[]): Treatment {
  const derive = origins.some(({ key, rule }) => key === 'derive' && rule !== 'built-in') ? 'kept' : 'default';
  const treatment = slot.kernel === null ? settings : withKernel(settings, slot.kernel, derive);
  return changed(treatment, slot.change);
}

function changed(treatment: Treatment, change: Change): Treatment {
  const { light, weight, wrap, keepCoverage, fill, renormalise } = change;
  return {
    ...treatment,
    ...(light !== undefined && { light }),
    ...(wrap !== undefined && { wrap: { x: wrap, y: wrap } }),
    ...(fill !== undefined && { fill }),
    alpha: {
      ...treatment.alpha,
      ...(weight !== undefined && { weight }),
      ...(keepCoverage !== undefined && { keepCoverage }),
    },
    normal: {
      ...treatment.normal,
      ...(renormalise !== undefined && { base: renormalise ? ('renormalise' as const) : ('keep' as const) }),
    },
  };
}
