import type { Node } from 'jsonc-parser';
import { readChannels } from './channels.ts';
import { readChoice } from './choice.ts';
import { describe, describeNode, describeNumber } from './describe.ts';
import { textFault } from './grammar.ts';
import { readKernel } from './kernel-choice.ts';
import { type Reading, readFields, report, reportFault } from './reading.ts';
import { type Key, optionsOf, type Shape } from './shape.ts';

/** Reads one value; undefined where it has a problem, which is reported. `key` names it in words. */
export function readValue(reading: Reading, node: Node, shape: Shape, key: string): unknown {
  const fitting = optionsOf(shape).filter((option) => nodeTypes(option).includes(node.type));
  if (fitting.length === 0) {
    report(reading, node, 'wrong-type', { key, expected: describe(shape), received: describeNode(node) });
    return undefined;
  }
  const option = closest(fitting, node);
  const hints = fitting.flatMap(knownNames);
  switch (option.kind) {
    case 'choice':
      return readChoice(reading, node, option.choices, key);
    case 'flag':
      return node.value;
    case 'number': {
      const value = node.value as number;
      const inside = value >= option.min && value <= option.max && (option.whole === 'any' || Number.isInteger(value));
      // Negative zero would not survive writing.
      if (inside) return value === 0 ? 0 : value;
      report(reading, node, 'out-of-range', { key, expected: describeNumber(option), received: value });
      return undefined;
    }
    case 'text': {
      const fault = textFault(node.value, option.grammar);
      if (fault === null) return node.value;
      reportFault(reading, node, fault);
      return undefined;
    }
    case 'list':
      return readList(reading, node, option, key);
    case 'record':
      return readRecord(reading, node, option.keys, hints, key);
    case 'kernel':
      return readKernel(reading, node, hints, key);
    case 'channels':
      return readChannels(reading, node);
    case 'group':
    case 'either':
    case 'spread':
      throw new TypeError(`Expected the shape of one value for ${key} but received ${option.kind}`);
  }
}

/** The option that shares the most keys with an object; the first of equals. */
export function closest(options: readonly Shape[], node: Node): Shape {
  const given = node.type === 'object' ? (node.children ?? []).map((each) => each.children?.[0].value as string) : [];
  const shared = options.map((option) => {
    const known = knownNames(option);
    return given.filter((name) => known.includes(name)).length;
  });
  return options[shared.indexOf(Math.max(...shared))];
}

/** Types of JSON nodes that a shape's value may have. */
export function nodeTypes(shape: Shape): readonly Node['type'][] {
  switch (shape.kind) {
    case 'choice':
      return [...new Set(shape.choices.map((each) => (typeof each === 'string' ? 'string' : 'number')))];
    case 'flag':
      return ['boolean'];
    case 'number':
      return ['number'];
    case 'text':
      return ['string'];
    case 'list':
      return ['array'];
    case 'record':
    case 'group':
    case 'channels':
      return ['object'];
    case 'kernel':
      return ['string', 'object'];
    case 'either':
    case 'spread':
      return optionsOf(shape).flatMap(nodeTypes);
  }
}

/** Names that an object of this shape may have. */
export function knownNames(shape: Shape): readonly string[] {
  switch (shape.kind) {
    case 'record':
    case 'group':
      return shape.keys.map((key) => key.name);
    case 'kernel':
      return ['name'];
    default:
      return [];
  }
}

function readList(reading: Reading, node: Node, shape: Shape & { kind: 'list' }, key: string): unknown[] | undefined {
  const items = node.children ?? [];
  const before = reading.problems.length;
  if (items.length < shape.min || items.length > shape.max) {
    const count = shape.min === shape.max ? shape.min : `${shape.min}..${shape.max}`;
    report(reading, node, 'out-of-range', { key, expected: `${count} items`, received: items.length });
  }
  const values = items.map((item, index) => readValue(reading, item, shape.item, `${key}[${index}]`));
  return reading.problems.length === before ? values : undefined;
}

function readRecord(
  reading: Reading,
  node: Node,
  keys: readonly Key[],
  hints: readonly string[],
  key: string,
): Record<string, unknown> | undefined {
  const before = reading.problems.length;
  const values: Record<string, unknown> = {};
  for (const field of readFields(reading, node, keys, hints)) {
    values[field.key.name] = readValue(reading, field.value, field.key.shape, `${key}.${field.key.name}`);
  }
  return reading.problems.length === before ? values : undefined;
}
