import type { Node } from 'jsonc-parser';
import { nearest } from './nearest.ts';
import { type Reading, report } from './reading.ts';

/** Reads a text or number that must be one of `choices`; undefined where it is none, which is reported. */
export function readChoice(
  reading: Reading,
  node: Node,
  choices: readonly (string | number)[],
  key: string,
): string | number | undefined {
  if (choices.includes(node.value)) return node.value;
  const known = choices.map((each) => JSON.stringify(each));
  const received = JSON.stringify(node.value);
  report(reading, node, 'bad-choice', { key, received, nearest: nearest(received, known), choices: known.join(', ') });
  return undefined;
}
