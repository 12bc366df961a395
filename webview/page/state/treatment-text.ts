import type { Treatment } from '../../../core/treatment/treatment.ts';

const texts = new WeakMap<Treatment, string>();

/** A treatment as text, to know it again by. Treatments are long, and the same object for long: their text is made once. */
export function treatmentText(treatment: Treatment): string {
  let text = texts.get(treatment);
  if (text === undefined) {
    text = JSON.stringify(treatment);
    texts.set(treatment, text);
  }
  return text;
}
