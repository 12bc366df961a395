import type { Treatment } from '../treatment/treatment.ts';

/** One setting that is no longer what it was. */
export interface SettingChange {
  /** Dotted path: `alpha.cutoff`. */
  readonly key: string;
  readonly before: unknown;
  readonly after: unknown;
}

/** Leaves in which two treatments differ, in the order of the first. */
export function compareTreatments(before: Treatment, after: Treatment): SettingChange[] {
  return compare('', before, after);
}

/** `kernel.minify.name "box" to "kaiser"; alpha.cutoff 0.5 to 0.3`. */
export function describeTreatments(before: Treatment, after: Treatment): string {
  const text = (value: unknown): string => (value === undefined ? 'unset' : JSON.stringify(value));
  return compareTreatments(before, after)
    .map(({ key, before: was, after: is }) => `${key} ${text(was)} to ${text(is)}`)
    .join('; ');
}

function compare(key: string, before: unknown, after: unknown): SettingChange[] {
  if (isGroup(before) && isGroup(after)) {
    const names = [...new Set([...Object.keys(before), ...Object.keys(after)])];
    return names.flatMap((name) => compare(key === '' ? name : `${key}.${name}`, before[name], after[name]));
  }
  return JSON.stringify(before) === JSON.stringify(after) ? [] : [{ key, before, after }];
}

function isGroup(value: unknown): value is Readonly<Record<string, unknown>> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
