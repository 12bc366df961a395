import { findNodeAtLocation, type JSONPath, type Node, parseTree } from 'jsonc-parser';
import { Refusal } from '../../problem.ts';
import { exactGlob } from '../paths/exact-glob.ts';
import { parseSettings, type Rule } from '../settings.ts';
import { appendItem, oneLineJson } from './json-edit.ts';

/** Whom settings are adopted for: one texture, which gets a last treatment of its own, or the treatment of an index. */
export type Adopter = { readonly texture: string } | { readonly treatment: number };

/** One stretch of a text and what stands there afterwards. Offsets in UTF-16 units. */
export interface TextChange {
  readonly offset: number;
  readonly length: number;
  readonly text: string;
}

/** The change to a settings file that adopts `settings`, keys of a treatment as the file spells them: objects are laid over
 *  objects, everything else is replaced; comments, order and whatever is not touched stay as they are. `path` names the file
 *  in problems. Throws Refusal where the file has problems, or would have. */
export function adoptSettings(
  text: string,
  path: string,
  adopter: Adopter,
  settings: Readonly<Record<string, unknown>>,
): TextChange {
  const treatments = treatmentsOf(text, path);
  const after =
    'treatment' in adopter
      ? lay(text, ['treatments', adopter.treatment], settings)
      : adoptFor(text, adopter.texture, treatments, settings);
  treatmentsOf(after, path);
  return changeBetween(text, after);
}

function adoptFor(
  text: string,
  texture: string,
  treatments: readonly Rule[],
  settings: Readonly<Record<string, unknown>>,
): string {
  const match = exactGlob(texture);
  const last = treatments.at(-1)?.match;
  if (last?.length === 1 && last[0] === match) return lay(text, ['treatments', treatments.length - 1], settings);
  const item = oneLineJson({ match, ...settings });
  const list = nodeAt(text, ['treatments']);
  if (list?.type === 'array') return appendItem(text, list, item);
  if (list !== undefined) return replace(text, list, `[${item}]`);
  const root = nodeAt(text, []) as Node;
  return appendItem(text, root, `"treatments": [${item}]`);
}

/** Lays values over the object at a place. */
function lay(text: string, place: JSONPath, values: Readonly<Record<string, unknown>>): string {
  let after = text;
  for (const [key, value] of Object.entries(values)) {
    const inner = [...place, key];
    const node = nodeAt(after, inner);
    if (node === undefined) {
      after = appendItem(after, nodeAt(after, place) as Node, `${JSON.stringify(key)}: ${oneLineJson(value)}`);
    } else if (isPlain(value) && node.type === 'object') after = lay(after, inner, value);
    else after = replace(after, node, oneLineJson(value));
  }
  return after;
}

function replace(text: string, { offset, length }: Node, by: string): string {
  return text.slice(0, offset) + by + text.slice(offset + length);
}

function nodeAt(text: string, place: JSONPath): Node | undefined {
  const root = parseTree(text, [], { allowTrailingComma: true });
  return root === undefined ? undefined : findNodeAtLocation(root, place);
}

function treatmentsOf(text: string, path: string): readonly Rule[] {
  const { settings, problems } = parseSettings(text, path);
  if (settings === null) throw new Refusal(problems[0]);
  return settings.rules.filter((rule) => rule.match !== null);
}

function isPlain(value: unknown): value is Readonly<Record<string, unknown>> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

/** The shortest stretch that differs. */
function changeBetween(before: string, after: string): TextChange {
  const shorter = Math.min(before.length, after.length);
  let start = 0;
  while (start < shorter && before[start] === after[start]) start++;
  let end = 0;
  while (end < shorter - start && before[before.length - 1 - end] === after[after.length - 1 - end]) end++;
  return { offset: start, length: before.length - start - end, text: after.slice(start, after.length - end) };
}
