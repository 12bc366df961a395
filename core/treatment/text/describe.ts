import type { Node } from 'jsonc-parser';
import { type NumberShape, optionsOf, type Shape, type Unit } from './shape.ts';

/** What a key takes, in words: `"srgb" or "linear"`, `a number 0..1`. */
export function describe(shape: Shape): string {
  return orList(optionsOf(shape).map(describeOption));
}

/** `a, b or c`, each once. */
export function orList(words: readonly string[]): string {
  const distinct = [...new Set(words)];
  return distinct.length < 2 ? distinct.join() : `${distinct.slice(0, -1).join(', ')} or ${distinct.at(-1)}`;
}

export function describeNumber(shape: NumberShape): string {
  const kind = shape.whole === 'whole' ? 'a whole number' : 'a number';
  return `${kind} ${figure(shape.min)}..${figure(shape.max)}${unitWords[shape.unit]}`;
}

/** A range's end, written so that it can be read: 1/1024 in place of 0.0009765625. */
export function figure(value: number): string {
  if (value === Number.MAX_SAFE_INTEGER) return '2^53-1';
  return value > 0 && value < 1 && Number.isInteger(1 / value) ? `1/${1 / value}` : String(value);
}

/** The JSON type of a node. */
export function describeNode(node: Node): string {
  return nodeWords[node.type];
}

function describeOption(shape: Shape): string {
  switch (shape.kind) {
    case 'choice':
      return orList(shape.choices.map((each) => JSON.stringify(each)));
    case 'flag':
      return 'true or false';
    case 'number':
      return describeNumber(shape);
    case 'text':
      return grammarWords[shape.grammar];
    case 'list':
      return `a list${shape.min === shape.max ? ` of ${shape.min}` : ''}, each ${describe(shape.item)}`;
    case 'record':
    case 'group':
      return 'an object';
    case 'kernel':
      return "a kernel's name or an object with its name";
    case 'channels':
      return 'an object of channel letters';
    case 'either':
    case 'spread':
      return describe(shape);
  }
}

const unitWords: Readonly<Record<Unit, string>> = {
  share: '',
  codes: ' codes',
  bytes: ' bytes',
  texels: ' texels',
  'texels per meter': ' texels per meter',
  degrees: ' degrees',
  pixels: ' pixels',
  level: '',
  factor: '',
  number: '',
};

const grammarWords = {
  any: 'a text',
  folder: 'a path',
  glob: 'a glob',
  'output-pattern': 'a path pattern',
  'source-pattern': 'a path pattern',
  target: 'a text such as "2x" or "48x48"',
  'target-name': 'a text',
} as const;

const nodeWords: Readonly<Record<Node['type'], string>> = {
  object: 'an object',
  array: 'a list',
  property: 'a property',
  string: 'a text',
  number: 'a number',
  boolean: 'true or false',
  null: 'null',
};
