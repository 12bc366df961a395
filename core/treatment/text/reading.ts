import type { Node } from 'jsonc-parser';
import type { Problem } from '../../problem.ts';
import type { Code, Fault, Values } from '../../words.ts';
import { nearest } from './nearest.ts';
import type { Spot } from './place.ts';
import type { Key } from './shape.ts';

/** One settings file while it is read: where its nodes are, and what was found wrong so far. */
export interface Reading {
  readonly path: string;
  readonly problems: Problem[];
  spot(offset: number): Spot;
}

/** A key of an object in the file, with its value. */
export interface Field {
  readonly key: Key;
  readonly name: Node;
  readonly value: Node;
}

export function report<C extends Code>(reading: Reading, node: Node, code: C, values: Values<C>): void {
  reading.problems.push({ code, severity: 'error', values, path: reading.path, ...reading.spot(node.offset) });
}

export function reportFault(reading: Reading, node: Node, fault: Fault): void {
  report(reading, node, fault.code, fault.values);
}

/** The known fields of an object, in the file's order. Reports unknown ones (the nearest is sought among `hints` too),
 *  repeated ones and, where none was unknown, required ones that are missing. */
export function readFields(
  reading: Reading,
  object: Node,
  keys: readonly Key[],
  hints: readonly string[] = [],
): readonly Field[] {
  const seen = new Map<string, Field>();
  let strangers = 0;
  for (const property of object.children ?? []) {
    const [name, value] = property.children as [Node, Node];
    const key = keys.find((each) => each.name === name.value);
    const earlier = seen.get(name.value);
    if (key === undefined) {
      strangers += 1;
      const known = nearest(name.value, [...keys.map((each) => each.name), ...hints]);
      report(reading, name, 'unknown-key', { key: name.value, nearest: known });
    } else if (earlier !== undefined) {
      const { line, column } = reading.spot(earlier.name.offset);
      report(reading, name, 'duplicate-key', { key: name.value, first: `${line}:${column}` });
    } else {
      seen.set(name.value, { key, name, value });
    }
  }
  const missing = keys.find((each) => each.default.kind === 'required' && !seen.has(each.name));
  if (missing !== undefined && strangers === 0) report(reading, object, 'missing-key', { key: missing.name });
  return [...seen.values()];
}
