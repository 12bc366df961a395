import { figure, light, percent } from '../figures.ts';
import type { HaloAnswer, PrintStats } from '../proof/want.ts';
import type { Treatment } from '../treatment/treatment.ts';

/** One number of a print in words. */
export interface Measured {
  readonly name: string;
  readonly text: string;
  /** What is wrong with it, where a limit of the treatment says so. */
  readonly over: string | null;
}

/** What was measured on a print, held against the treatment's limits. `base` is what level 0 covers. */
export function measuredOf(
  stats: PrintStats,
  halo: HaloAnswer['halo'],
  { treatment, base }: { readonly treatment: Treatment; readonly base: number | null },
): readonly Measured[] {
  const { limits } = treatment;
  const measured: Measured[] = [];
  // Normals are made unit, so what overshoots is no color that would be seen.
  if (halo !== null && stats.normalLength === null) {
    const over = limits.halo !== null && halo.worst > limits.halo ? `over ${figure(limits.halo)}` : null;
    measured.push({ name: 'halo', text: halo.worst.toFixed(1), over });
  }
  if (stats.coverage !== null) {
    const least = limits.thinning === null || base === null ? null : base * (1 - limits.thinning);
    const over = least !== null && stats.coverage < least ? `under ${percent(least)}` : null;
    measured.push({ name: 'coverage', text: percent(stats.coverage), over });
  }
  if (stats.luminance !== null) measured.push({ name: 'luminance', text: light(stats.luminance), over: null });
  if (stats.normalLength !== null) {
    measured.push({ name: 'normal length', text: light(stats.normalLength), over: null });
  }
  return measured;
}
