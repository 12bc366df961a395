// What a value in the settings file may be, as data: validation, the JSON schema and the README's table read the same shapes.

export type Shape =
  | { readonly kind: 'choice'; readonly choices: readonly (string | number)[] }
  | { readonly kind: 'flag' }
  | NumberShape
  | { readonly kind: 'text'; readonly grammar: Grammar }
  | { readonly kind: 'list'; readonly item: Shape; readonly min: number; readonly max: number }
  /** An object that is one value: a later rule replaces it whole. */
  | { readonly kind: 'record'; readonly keys: readonly Key[] }
  /** An object whose keys merge one by one, and may each be null. */
  | { readonly kind: 'group'; readonly keys: readonly Key[] }
  /** One value that sets several keys of the group it stands for. */
  | { readonly kind: 'spread'; readonly over: readonly string[]; readonly shape: Shape }
  | { readonly kind: 'either'; readonly options: readonly Shape[] }
  /** A kernel's name, or an object of its name and parameters. */
  | { readonly kind: 'kernel' }
  /** An object of channel letters and contents. */
  | { readonly kind: 'channels' };

export interface NumberShape {
  readonly kind: 'number';
  readonly unit: Unit;
  readonly min: number;
  readonly max: number;
  readonly whole: 'whole' | 'any';
}

export type Unit =
  | 'share'
  | 'codes'
  | 'bytes'
  | 'texels'
  | 'texels per meter'
  | 'degrees'
  | 'pixels'
  | 'level'
  | 'factor'
  | 'number';

/** Rules for texts; grammar.ts knows them. */
export type Grammar = 'any' | 'folder' | 'glob' | 'output-pattern' | 'source-pattern' | 'target' | 'target-name';

export interface Key {
  readonly name: string;
  readonly shape: Shape;
  readonly default: Default;
  /** One sentence. */
  readonly says: string;
}

export type Default =
  | { readonly kind: 'value'; readonly value: unknown }
  /** Depends on other keys; resolve.ts works it out. */
  | { readonly kind: 'rule'; readonly words: string }
  /** Must be given. */
  | { readonly kind: 'required' }
  /** A group: its keys have their own. */
  | { readonly kind: 'inner' };

export const flag: Shape = { kind: 'flag' };

export function choice(...choices: readonly (string | number)[]): Shape {
  return { kind: 'choice', choices };
}

export function number(unit: Unit, min: number, max: number): Shape {
  return { kind: 'number', unit, min, max, whole: 'any' };
}

export function whole(unit: Unit, min: number, max: number): Shape {
  return { kind: 'number', unit, min, max, whole: 'whole' };
}

export function text(grammar: Grammar): Shape {
  return { kind: 'text', grammar };
}

export function list(item: Shape, min: number, max: number): Shape {
  return { kind: 'list', item, min, max };
}

export function record(...keys: readonly Key[]): Shape {
  return { kind: 'record', keys };
}

export function group(...keys: readonly Key[]): Shape {
  return { kind: 'group', keys };
}

export function spread(over: readonly string[], shape: Shape): Shape {
  return { kind: 'spread', over, shape };
}

export function either(...options: readonly Shape[]): Shape {
  return { kind: 'either', options };
}

/** The shapes that a value may have, `either` and `spread` opened. */
export function optionsOf(shape: Shape): readonly Shape[] {
  if (shape.kind === 'either') return shape.options.flatMap(optionsOf);
  if (shape.kind === 'spread') return optionsOf(shape.shape);
  return [shape];
}
