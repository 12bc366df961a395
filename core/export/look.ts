import { allows, findKernel } from '../kernel/table.ts';
import type { Wrap } from '../kernel/wrap.ts';
import {
  choice,
  dictionary,
  either,
  flag,
  integer,
  list,
  Misfit,
  nothing,
  number,
  object,
  optional,
  pair,
  type Shape,
  text,
} from '../manifest/shape.ts';
import { type Change, OWN_SLOT, type Sight, type Slot } from '../proof/slot.ts';
import type { KernelChoice, Target } from '../treatment/treatment.ts';
import type { ProofPreferences } from './order.ts';

/** What a sheet takes from the state of a page. */
export interface Look {
  /** Null leaves it to the texture. */
  readonly sight: Sight | null;
  readonly typed: readonly Target[];
  /** The settings' own first. */
  readonly slots: readonly Slot[];
  /** Null leaves it to what the texture holds. */
  readonly show: SheetShow | null;
  readonly backdrop: ProofPreferences['backdrop'];
  /** Light on normals: toward the viewer from -1..1 across and up. */
  readonly lamp: { readonly x: number; readonly y: number };
}

export type SheetShow = 'color' | 'bare' | 'r' | 'g' | 'b' | 'a' | 'mask' | 'lit';

/** Reads what a page keeps. Nothing in it is trusted: a key that does not fit is as at the start. */
export function readLook(state: unknown, preferences: ProofPreferences): Look {
  const given = typeof state === 'object' && state !== null ? (state as Readonly<Record<string, unknown>>) : {};
  const read = <T>(key: string, shape: Shape<T>, start: T): T => {
    try {
      return shape(given[key], key);
    } catch (error) {
      if (error instanceof Misfit) return start;
      throw error;
    }
  };
  const slots = read('slots', list(slot), []);
  const show = read<SheetShow | null>('show', choice('bare', 'r', 'g', 'b', 'a', 'mask', 'lit'), null);
  return {
    sight: read('sight', either<Sight | null>(nothing, sight), null),
    typed: read('typed', list(target), []),
    slots: [OWN_SLOT, ...slots.filter(({ kernel, change }) => kernel !== null || Object.keys(change).length > 0)],
    show,
    backdrop: read('backdrop', choice('checker', 'black', 'white', 'gray'), preferences.backdrop),
    lamp: read('lamp', object<Look['lamp']>({ x: number(-1, 1), y: number(-1, 1) }), { x: -0.5, y: 0.6 }),
  };
}

const sight: Shape<Sight> = (value, at) => {
  const kind = (value as { readonly kind?: unknown } | null | undefined)?.kind;
  if (kind === 'level')
    return object<Sight & { kind: 'level' }>({ kind: choice('level'), level: integer(0, 14) })(value, at);
  if (kind === 'target')
    return object<Sight & { kind: 'target' }>({ kind: choice('target'), name: targetName })(value, at);
  return object<Sight & { kind: 'lod' }>({ kind: choice('lod'), lod: number(0, 14) })(value, at);
};

const targetName = text(/^[\p{L}\p{N}._ /-]{1,80}$/u, 'a name');

const sides = pair(integer(1, 16384));

const target: Shape<Target> = (value, at) => {
  const given = value as { readonly scale?: unknown; readonly extent?: unknown } | null | undefined;
  if (given?.scale !== undefined)
    return object<Target & { scale: number }>({ name: targetName, scale: number(1 / 1024, 64) })(value, at);
  if (given?.extent !== undefined)
    return object<{ name: string; extent: readonly [number, number] }>({ name: targetName, extent: sides })(value, at);
  return object<{ name: string; cell: readonly [number, number] }>({ name: targetName, cell: sides })(value, at);
};

const kernel: Shape<KernelChoice> = (value, at) => {
  const read = object<KernelChoice>({
    name: text(/^[a-z0-9-]{1,20}$/, 'a kernel'),
    params: dictionary(number(-2, 16), /^[a-z]+$/, () => 0),
  })(value, at);
  const found = findKernel(read.name);
  if (found === undefined) throw new Misfit(at, 'a kernel of the table');
  const fits = found.params.every((param) => allows(param, read.params[param.name]));
  if (!fits || Object.keys(read.params).length !== found.params.length) throw new Misfit(at, 'its parameters');
  return read;
};

const wrap = choice('clamp-to-edge', 'repeat', 'mirror-repeat', 'clamp-to-border');

const change = object<Change>({
  light: optional(choice('linear', 'code')),
  weight: optional(flag),
  wrap: optional<Wrap>(wrap),
  keepCoverage: optional(flag),
  fill: optional(choice('none', 'hidden', 'all')),
  renormalise: optional(flag),
});

const slot = object<Slot>({
  id: integer(0, 2 ** 31),
  kernel: either<KernelChoice | null>(nothing, kernel),
  change,
});
