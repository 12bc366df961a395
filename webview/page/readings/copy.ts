import type { Model } from '../state/model.ts';
import { t } from '../words/t.ts';

/** Has the host put a text on the clipboard, and says what became of it. */
export async function copy(model: Model, text: string): Promise<void> {
  const { reply } = await model.link.ask('copy', { text });
  model.say(
    'problem' in reply
      ? { text: t('The text could not be copied.'), kind: 'failed' }
      : { text: t('Copied.'), kind: 'said' },
  );
}
