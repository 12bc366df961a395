import { harmWords } from '../../../core/review/harms.ts';
import type { Harm } from '../../../core/review/impact.ts';
import { percent, type Verdict, verdicts } from '../../../core/review/verdict.ts';
import { sayImage } from '../../../core/review/visible.ts';
import { t } from '../words/t.ts';

/** A verdict in the user's language. */
export function verdictWords({ kind, values }: Verdict): string {
  return t(verdicts[kind], values);
}

/** A harm in the user's language. */
export function harmText({ name, severity, image }: Harm): string {
  return t(harmWords[name], { share: percent(severity), image: image === null ? '' : sayImage(image) });
}

/** How a file changed, in one word. */
export function statusWord(status: string): string {
  return STATUSES[status]?.() ?? status;
}

const STATUSES: Readonly<Record<string, () => string>> = {
  added: () => t('added'),
  removed: () => t('removed'),
  changed: () => t('changed'),
  renamed: () => t('renamed'),
  retyped: () => t('another kind of file'),
  unmerged: () => t('merge conflict'),
  treated: () => t('other settings'),
};
