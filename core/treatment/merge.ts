import type { Rule, Settings } from './settings.ts';
import type { Entry } from './text/entry.ts';

/** A leaf, or a null, with the rule that set it. */
export interface Merged extends Entry {
  readonly rule: string;
}

/** What rules say together: leaves by dotted path, and nulls that clear whatever lies under them. */
export type Patch = ReadonlyMap<string, Merged>;

/** The entries of one rule, in its order. */
export function patchOf(rule: string, entries: readonly Entry[]): Patch {
  return entries.reduce<Patch>((patch, entry) => withEntry(patch, { ...entry, rule }), new Map());
}

/** `later` laid over `earlier`: leaf by leaf, the later one wins. Associative. */
export function mergePatches(earlier: Patch, later: Patch): Patch {
  let patch = earlier;
  for (const entry of later.values()) patch = withEntry(patch, entry);
  return patch;
}

/** What the settings say about a texture; nulls have done their work and are left out. */
export function mergedFor(settings: Settings | null, path: string): Patch {
  return mergeRules(settings?.rules.filter((rule) => rule.hits(path)) ?? []);
}

/** The same of the rules that hit a texture. */
export function mergeRules(rules: readonly Rule[]): Patch {
  const patches = rules.map((rule) => patchOf(rule.name, rule.entries));
  return withoutNulls(patches.reduce(mergePatches, new Map()));
}

export function withoutNulls(patch: Patch): Patch {
  return new Map([...patch].filter(([, entry]) => entry.value !== null));
}

/** Adds one entry. Whatever lies under its key goes; a value above it, which an object now replaces, becomes a null there, so
 *  that leaves from before that value stay gone too. */
function withEntry(patch: Patch, entry: Merged): Patch {
  const result = new Map<string, Merged>();
  for (const [key, other] of patch) {
    if (key === entry.key || key.startsWith(`${entry.key}.`)) continue;
    const isAbove = entry.key.startsWith(`${key}.`);
    result.set(key, isAbove ? { ...other, value: null } : other);
  }
  result.set(entry.key, entry);
  return result;
}
