import type { Node } from 'jsonc-parser';
import type { Problem } from '../problem.ts';
import { settledConflicts } from './conflict-check.ts';
import { fileKeys, ruleKeys, treatmentKeys } from './keys.ts';
import { globMatcher } from './paths/glob.ts';
import { describeNode } from './text/describe.ts';
import { type Entry, readGroup } from './text/entry.ts';
import { type Spot, spotFinder } from './text/place.ts';
import { type Field, type Reading, readFields, report } from './text/reading.ts';
import { parseText } from './text/syntax.ts';
import { readValue } from './text/value.ts';

/** A settings file, checked. */
export interface Settings {
  /** As it was given; problems and origins name it. */
  readonly path: string;
  /** Relative to the root, `.` segments removed; empty for the root itself. */
  readonly outDir: string;
  readonly exclude: readonly string[];
  /** `defaults`, then the treatments, in the file's order: later ones win. */
  readonly rules: readonly Rule[];
}

export interface Rule {
  /** `defaults` or `treatments[2]`. */
  readonly name: string;
  /** Globs; null hits every texture. */
  readonly match: readonly string[] | null;
  /** Of the `match` value, or of the rule where it has none. */
  readonly at: Spot;
  readonly entries: readonly Entry[];
  hits(path: string): boolean;
}

export interface ParsedSettings {
  /** null where there is an error. */
  readonly settings: Settings | null;
  readonly problems: readonly Problem[];
}

/** The folder of outputs where no settings file says another. */
export const DEFAULT_OUT_DIR: string = fileDefault('outDir');

/** Reads the text of a settings file: JSON with comments and trailing commas. Reports every problem it finds, each with its
 *  line and column; a text that is not JSON is reported as that alone. */
export function parseSettings(text: string, path: string): ParsedSettings {
  const content = text.charCodeAt(0) === 0xfeff ? text.slice(1) : text;
  const reading: Reading = { path, problems: [], spot: spotFinder(content) };
  const root = parseText(reading, content);
  const settings = root === null ? null : readFile(reading, root);
  if (settings !== null && reading.problems.length === 0) reading.problems.push(...settledConflicts(settings));
  const problems = reading.problems.sort((a, b) => a.line! - b.line! || a.column! - b.column!);
  return { settings: problems.length === 0 ? settings : null, problems };
}

function readFile(reading: Reading, root: Node): Settings | null {
  if (root.type !== 'object') {
    report(reading, root, 'wrong-type', {
      key: 'The settings file',
      expected: 'an object',
      received: describeNode(root),
    });
    return null;
  }
  let outDir = DEFAULT_OUT_DIR;
  let exclude: readonly string[] = [];
  let defaults: readonly Rule[] = [];
  let treatments: readonly Rule[] = [];
  for (const field of readFields(reading, root, fileKeys)) {
    if (field.value.type === 'null') continue;
    switch (field.key.name) {
      case 'outDir':
        outDir = tidyFolder((readField(reading, field) as string | undefined) ?? DEFAULT_OUT_DIR);
        break;
      case 'exclude':
        exclude = (readField(reading, field) as readonly string[] | undefined) ?? [];
        break;
      case 'defaults':
        if (hasType(reading, field.value, 'object', 'defaults')) defaults = [readDefaults(reading, field.value)];
        break;
      case 'treatments':
        if (hasType(reading, field.value, 'array', 'treatments')) treatments = readTreatments(reading, field.value);
        break;
      case '$schema':
        readField(reading, field);
        break;
      default:
        throw new TypeError(`Expected a known key but received ${field.key.name}`);
    }
  }
  const rules = [...defaults, ...treatments];
  if (outDir === '') checkBeside(reading, rules);
  return { path: reading.path, outDir, exclude, rules };
}

/** Outputs among sources are told apart by the manifest beside them, so `name` must leave them in that folder. */
function checkBeside(reading: Reading, rules: readonly Rule[]): void {
  for (const { key, value, keyAt } of rules.flatMap((rule) => rule.entries)) {
    if (key !== 'name' || value === null || /^\{path\}\/[^/]+$/.test(value as string)) continue;
    const { path } = reading;
    reading.problems.push({
      code: 'name-beside',
      severity: 'error',
      values: { pattern: value as string },
      path,
      ...keyAt,
    });
  }
}

function readField(reading: Reading, field: Field): unknown {
  return readValue(reading, field.value, field.key.shape, field.key.name);
}

function readDefaults(reading: Reading, node: Node): Rule {
  const entries = readGroup(reading, node, treatmentKeys);
  return { name: 'defaults', match: null, at: reading.spot(node.offset), entries, hits: () => true };
}

function readTreatments(reading: Reading, list: Node): readonly Rule[] {
  return (list.children ?? []).flatMap((node, index) => {
    const name = `treatments[${index}]`;
    if (!hasType(reading, node, 'object', name)) return [];
    const all = readGroup(reading, node, ruleKeys);
    const entry = all.find((each) => each.key === 'match');
    const entries = all.filter((each) => each.key !== 'match');
    const valueNode = node.children?.find((each) => each.children?.[0].value === 'match')?.children?.[1];
    if (entry?.value === null && valueNode !== undefined) {
      report(reading, valueNode, 'wrong-type', { key: 'match', expected: 'a glob or a list', received: 'null' });
    }
    const match = typeof entry?.value === 'string' ? [entry.value] : ((entry?.value ?? []) as readonly string[]);
    return [{ name, match, at: entry?.at ?? reading.spot(node.offset), entries, hits: globMatcher(match) }];
  });
}

function hasType(reading: Reading, node: Node, type: 'object' | 'array', key: string): boolean {
  if (node.type === type) return true;
  const expected = type === 'object' ? 'an object' : 'a list';
  report(reading, node, 'wrong-type', { key, expected, received: describeNode(node) });
  return false;
}

/** Without `.` and empty segments, so that folders compare as texts. */
function tidyFolder(folder: string): string {
  return folder
    .normalize('NFC')
    .split('/')
    .filter((segment) => segment !== '' && segment !== '.')
    .join('/');
}

function fileDefault(name: string): string {
  const fallback = fileKeys.find((key) => key.name === name)!.default;
  return (fallback as { readonly value: string }).value;
}
