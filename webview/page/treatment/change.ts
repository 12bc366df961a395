import type { Change, Slot } from '../../../core/proof/slot.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';

/** What a settings file would say to make the print the settings' own: keys as it spells them, only those that differ. */
export function adoptable(slot: Slot): Readonly<Record<string, unknown>> {
  const { kernel, change } = slot;
  const alpha = {
    ...(change.weight !== undefined && { weight: change.weight }),
    ...(change.keepCoverage !== undefined && { keepCoverage: change.keepCoverage }),
  };
  return {
    ...(kernel !== null && {
      kernel: Object.keys(kernel.params).length > 0 ? { name: kernel.name, ...kernel.params } : kernel.name,
    }),
    ...(change.light !== undefined && { light: change.light }),
    ...(change.wrap !== undefined && { wrap: change.wrap }),
    ...(change.fill !== undefined && { fill: change.fill }),
    ...(Object.keys(alpha).length > 0 && { alpha }),
    ...(change.renormalise !== undefined && { normal: { base: change.renormalise ? 'renormalise' : 'keep' } }),
  };
}

/** The change without what the settings say anyway. */
export function tidied(change: Change, settings: Treatment): Change {
  const same: Change = {
    light: settings.light,
    weight: settings.alpha.weight,
    ...(settings.wrap.x === settings.wrap.y && { wrap: settings.wrap.x }),
    keepCoverage: settings.alpha.keepCoverage,
    fill: settings.fill,
    renormalise: settings.normal.base === 'renormalise',
  };
  return Object.fromEntries(Object.entries(change).filter(([key, value]) => same[key as keyof Change] !== value));
}
