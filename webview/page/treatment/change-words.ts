import type { Change } from '../../../core/proof/slot.ts';
import { t } from '../words/t.ts';

/** What a print changes against the settings, a few words each. */
export function changeWords(change: Change): readonly string[] {
  const words: string[] = [];
  if (change.light !== undefined) words.push(change.light === 'code' ? t('in code space') : t('in linear light'));
  if (change.weight !== undefined) words.push(change.weight ? t('weighed by alpha') : t('not weighed by alpha'));
  if (change.wrap !== undefined) words.push(change.wrap);
  if (change.keepCoverage !== undefined) {
    words.push(change.keepCoverage ? t('coverage kept') : t('coverage not kept'));
  }
  if (change.fill !== undefined) words.push(t('fill {fill}', { fill: change.fill }));
  if (change.renormalise !== undefined) {
    words.push(change.renormalise ? t('level 0 renormalized') : t('level 0 as it is'));
  }
  return words;
}
