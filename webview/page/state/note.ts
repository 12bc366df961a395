import { type Problem, say } from '../../../core/problem.ts';
import { t } from '../words/t.ts';
import type { Disagreement } from './takeover.ts';

/** A state of the page in which there is nothing to show: one sentence, and one thing to do. */
export interface Note {
  readonly state: 'loading' | 'damaged' | 'not-downloaded' | 'too-large' | 'settings' | 'gone' | 'disagrees' | 'failed';
  readonly text: string;
  readonly action: 'again' | 'settings' | null;
}

/** The state that a problem puts the page into. Problems say themselves what to do, in their last sentence. */
export function noteOf(problem: Problem): Note {
  const text = say(problem);
  switch (problem.code) {
    case 'not-downloaded':
      return { state: 'not-downloaded', text, action: 'again' };
    case 'extent-out-of-range':
    case 'too-much-memory':
      return { state: 'too-large', text, action: 'again' };
    case 'unexpected':
    case 'source-unreadable':
      return { state: 'failed', text, action: 'again' };
    default:
      return { state: 'damaged', text, action: 'again' };
  }
}

export function loadingNote(): Note {
  return { state: 'loading', text: t('Reading the file …'), action: null };
}

export function goneNote(name: string): Note {
  return { state: 'gone', text: t('{name} is no longer there. It is shown as it was.', { name }), action: 'again' };
}

/** The host's first print and the page's own are not the same. */
export function disagreementNote({ count, all }: Disagreement): Note {
  const values = { count, all };
  const text = t(
    'The print made beside the file and the one made here differ in {count} of {all} codes. Either the file changed meanwhile or it did not come whole.',
    values,
  );
  return { state: 'disagrees', text, action: 'again' };
}

/** Settings that cannot be read: their first problem. */
export function settingsNote(problem: Problem | undefined): Note {
  const text = problem === undefined ? t('The settings cannot be read.') : say(problem);
  return { state: 'settings', text, action: 'settings' };
}
