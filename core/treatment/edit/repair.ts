import { createScanner } from 'jsonc-parser';
import type { Problem } from '../../problem.ts';

/** What an editor may put in the place of the token that a problem points at; null where there is no one answer. */
export function repairOf({ code, values }: Problem): string | null {
  if (code === 'unknown-key' && values.nearest !== values.key) return JSON.stringify(values.nearest);
  // Choices are spelled as JSON already.
  if (code === 'bad-choice') return String(values.nearest);
  return null;
}

/** Length in UTF-16 units of the token at an offset: a key or text with its quotes, a number, a bracket. At least 1, as long
 *  as there is text. */
export function tokenLength(text: string, offset: number): number {
  const scanner = createScanner(text, false);
  scanner.setPosition(offset);
  scanner.scan();
  return Math.min(Math.max(1, scanner.getTokenLength()), Math.max(0, text.length - offset));
}
