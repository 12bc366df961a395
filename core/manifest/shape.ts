// Small checkers that say what a JSON value must be. A shape returns the value with its keys in the shape's own order, so one
// table reads, checks and orders.

/** Checks `value`, found at the dotted path `at`, and returns it in canonical form. Throws Misfit. */
export type Shape<T> = (value: unknown, at: string) => T;

/** A value that is not what its shape says: where, and what was expected there. */
export class Misfit extends Error {
  readonly at: string;
  readonly expected: string;

  constructor(at: string, expected: string) {
    super(`Expected ${expected} for ${at || 'the document'}`);
    this.name = 'Misfit';
    this.at = at;
    this.expected = expected;
  }
}

type Fields<T> = {
  readonly [K in keyof T]-?: undefined extends T[K] ? Optional<Exclude<T[K], undefined>> : Shape<T[K]>;
};

interface Optional<T> {
  readonly optional: Shape<T>;
}

/** A key that may be left out. */
export function optional<T>(shape: Shape<T>): Optional<T> {
  return { optional: shape };
}

/** Exactly these keys, written in this order. */
export function object<T extends object>(fields: Fields<T>): Shape<T> {
  const names = Object.keys(fields) as (keyof T & string)[];
  return (value, at) => {
    const given = record(value, at);
    const result: Partial<T> = {};
    for (const name of names) {
      const field = fields[name] as Shape<T[typeof name]> | Optional<T[typeof name]>;
      const place = at === '' ? name : `${at}.${name}`;
      if (typeof field === 'function') result[name] = field(given[name], place);
      else if (given[name] !== undefined) result[name] = field.optional(given[name], place);
    }
    for (const name of Object.keys(given)) {
      if (!Object.hasOwn(fields, name)) throw new Misfit(at, `no key "${name}"`);
    }
    return result as T;
  };
}

/** Any keys that `allowed` lets pass, in the order of `compare`. */
export function dictionary<T>(
  shape: Shape<T>,
  allowed: RegExp,
  compare: (a: string, b: string) => number,
): Shape<Readonly<Record<string, T>>> {
  return (value, at) => {
    const given = record(value, at);
    const result: Record<string, T> = {};
    for (const name of Object.keys(given).sort(compare)) {
      if (!allowed.test(name)) throw new Misfit(at, `no key "${name}"`);
      result[name] = shape(given[name], `${at}.${name}`);
    }
    return result;
  };
}

export function list<T>(shape: Shape<T>): Shape<readonly T[]> {
  return (value, at) => {
    if (!Array.isArray(value)) throw new Misfit(at, 'a list');
    return value.map((each, index) => shape(each, `${at}[${index}]`));
  };
}

export function pair<T>(shape: Shape<T>): Shape<readonly [T, T]> {
  return (value, at) => {
    if (!Array.isArray(value) || value.length !== 2) throw new Misfit(at, 'two values');
    return [shape(value[0], `${at}[0]`), shape(value[1], `${at}[1]`)];
  };
}

export function choice<const T extends string | number>(...choices: readonly T[]): Shape<T> {
  return (value, at) => {
    if (!choices.includes(value as T)) throw new Misfit(at, choices.map((each) => JSON.stringify(each)).join(', '));
    return value as T;
  };
}

export function number(least: number, most: number): Shape<number> {
  return (value, at) => {
    if (typeof value !== 'number' || !(value >= least && value <= most))
      throw new Misfit(at, `a number ${least}..${most}`);
    // Negative zero would not survive writing.
    return value === 0 ? 0 : value;
  };
}

export function integer(least: number, most: number): Shape<number> {
  const within = number(least, most);
  return (value, at) => {
    if (!Number.isInteger(value)) throw new Misfit(at, `an integer ${least}..${most}`);
    return within(value, at);
  };
}

/** A measured number, kept to 6 significant digits: enough to see a change, few enough to read. */
export function statistic(least: number, most: number): Shape<number> {
  const within = number(least, most);
  return (value, at) => {
    const rounded = typeof value === 'number' ? Number(value.toPrecision(6)) : value;
    return within(rounded, at);
  };
}

export const flag: Shape<boolean> = (value, at) => {
  if (typeof value !== 'boolean') throw new Misfit(at, 'true or false');
  return value;
};

export function text(pattern: RegExp, meaning: string): Shape<string> {
  return (value, at) => {
    if (typeof value !== 'string' || !pattern.test(value)) throw new Misfit(at, meaning);
    return value;
  };
}

/** The first shape that fits decides; the words of the last one are reported. */
export function either<T>(...shapes: readonly Shape<T>[]): Shape<T> {
  return (value, at) => {
    let misfit: unknown;
    for (const shape of shapes) {
      try {
        return shape(value, at);
      } catch (error) {
        if (!(error instanceof Misfit)) throw error;
        misfit = error;
      }
    }
    throw misfit;
  };
}

export const nothing: Shape<null> = (value, at) => {
  if (value !== null) throw new Misfit(at, 'null');
  return null;
};

function record(value: unknown, at: string): Record<string, unknown> {
  if (typeof value !== 'object' || value === null || Array.isArray(value)) throw new Misfit(at, 'an object');
  return value as Record<string, unknown>;
}
