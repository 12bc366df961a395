import type { Problem } from '../problem.ts';
import { completePatch } from './complete.ts';
import { conflicts } from './conflicts.ts';
import { mergePatches, type Patch, patchOf, withoutNulls } from './merge.ts';
import type { Rule, Settings } from './settings.ts';
import type { Treatment } from './treatment.ts';

/** A conflict of a treatment, at the key that is to blame, with the keys that could settle it. */
export interface FoundConflict {
  readonly problem: Problem;
  readonly keys: readonly string[];
}

/** Every conflict that a treatment, made of `merged`, has. `path` is the settings file's. */
export function findConflicts(treatment: Treatment, merged: Patch, path: string | undefined): readonly FoundConflict[] {
  return conflicts.flatMap(({ keys, find }) => {
    const fault = find(treatment, merged);
    if (fault === null) return [];
    const entry = keys.flatMap((key) => related(merged, key)).at(0);
    const place = { ...(path === undefined ? {} : { path }), ...entry?.keyAt };
    return [{ problem: { ...fault, severity: 'error' as const, ...place }, keys }];
  });
}

/** Conflicts that are certain before any texture is known: those of `defaults`, alone and with each treatment, that no other
 *  treatment has a key to settle. All others are found when a texture is resolved. */
export function settledConflicts(settings: Settings): readonly Problem[] {
  const defaults = settings.rules.filter((rule) => rule.match === null);
  const treatments = settings.rules.filter((rule) => rule.match !== null);
  const found = [null, ...treatments].flatMap((treatment) => {
    const rules = treatment === null ? defaults : [...defaults, treatment];
    const others = treatments.filter((rule) => rule !== treatment);
    const merged = withoutNulls(rules.map((rule) => patchOf(rule.name, rule.entries)).reduce(mergePatches, new Map()));
    const conflicted = findConflicts(completePatch(merged, settings.path).treatment, merged, settings.path);
    return conflicted.filter(({ keys }) => !others.some((rule) => sets(rule, keys))).map(({ problem }) => problem);
  });
  return distinctProblems(found);
}

/** Each problem once. */
export function distinctProblems(problems: readonly Problem[]): readonly Problem[] {
  const byText = new Map(problems.map((problem) => [JSON.stringify(problem), problem]));
  return [...byText.values()];
}

function sets(rule: Rule, keys: readonly string[]): boolean {
  return rule.entries.some((entry) => keys.some((key) => isRelated(entry.key, key)));
}

function related(merged: Patch, key: string) {
  return [...merged.values()].filter((entry) => isRelated(entry.key, key));
}

/** Whether one key is the other or lies under it. */
function isRelated(a: string, b: string): boolean {
  return a === b || a.startsWith(`${b}.`) || b.startsWith(`${a}.`);
}
