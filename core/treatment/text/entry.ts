import type { Node } from 'jsonc-parser';
import type { Spot } from './place.ts';
import { type Reading, readFields } from './reading.ts';
import { type Key, optionsOf, type Shape } from './shape.ts';
import { closest, knownNames, nodeTypes, readValue } from './value.ts';

/** One leaf that a rule sets. */
export interface Entry {
  /** Dotted path: `alpha.cutoff`. A null at a group stands for all its leaves. */
  readonly key: string;
  /** null returns the key, and everything below it, to its default. */
  readonly value: unknown;
  /** Of the value. */
  readonly at: Spot;
  /** Of the key that is spelled in the file. */
  readonly keyAt: Spot;
  /** Whether the file gave this leaf a value of its own, or one value for several leaves. */
  readonly given: 'alone' | 'spread';
}

/** Reads an object of keys that merge, as the leaves it sets, in the file's order. Reports what is wrong. */
export function readGroup(
  reading: Reading,
  node: Node,
  keys: readonly Key[],
  prefix = '',
  hints: readonly string[] = [],
): readonly Entry[] {
  return readFields(reading, node, keys, hints).flatMap((field) => {
    const path = `${prefix}${field.key.name}`;
    const places = { at: reading.spot(field.value.offset), keyAt: reading.spot(field.name.offset) };
    if (field.value.type === 'null') return [{ key: path, value: null, ...places, given: 'alone' as const }];
    const shape = chooseShape(field.key.shape, field.value);
    if (shape.kind === 'group') {
      return readGroup(reading, field.value, shape.keys, `${path}.`, otherNames(field.key.shape, field.value));
    }
    // The whole shape is read, so that problems name every choice.
    const value = readValue(reading, field.value, field.key.shape, path);
    if (value === undefined) return [];
    if (shape.kind !== 'spread') return [{ key: path, value, ...places, given: 'alone' as const }];
    return shape.over.map((name) => ({ key: `${path}.${name}`, value, ...places, given: 'spread' as const }));
  });
}

/** The option of an `either` that the node is meant to be. */
function chooseShape(shape: Shape, node: Node): Shape {
  const options = shape.kind === 'either' ? shape.options : [shape];
  const fitting = options.filter((option) => nodeTypes(option).includes(node.type));
  if (fitting.length === 0) return options[0].kind === 'group' ? { kind: 'record', keys: [] } : options[0];
  const opened = fitting.map((option) => (option.kind === 'spread' ? option.shape : option));
  return fitting[opened.indexOf(closest(opened, node))];
}

/** Names that the node could have had, had it been meant otherwise. */
function otherNames(shape: Shape, node: Node): readonly string[] {
  return optionsOf(shape)
    .filter((option) => nodeTypes(option).includes(node.type))
    .flatMap(knownNames);
}
