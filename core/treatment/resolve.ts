import { type Problem, Refusal, warning } from '../problem.ts';
import { completePatch } from './complete.ts';
import { findConflicts } from './conflict-check.ts';
import { mergeRules } from './merge.ts';
import type { Rule, Settings } from './settings.ts';
import type { Texture } from './treatment.ts';

/** What applies to a texture, every leaf with the rule that set it. `texturePath` is relative to the root, "/"-separated,
 *  in NFC; without settings the built-in defaults apply. Throws Refusal where rules contradict each other for this texture. */
export function resolveTreatment(settings: Settings | null, texturePath: string): Texture {
  const rules = settings?.rules.filter((rule) => rule.hits(texturePath)) ?? [];
  const resolved = resolveRules(settings, rules);
  if ('code' in resolved) throw new Refusal(resolved);
  return { path: texturePath, ...resolved };
}

type Resolved = Pick<Texture, 'treatment' | 'review' | 'origins'>;

/** Thousands of textures follow the same few rules: what these say is made out once, and is one object for all of them. */
function resolveRules(settings: Settings | null, rules: readonly Rule[]): Resolved | Problem {
  const known = settings === null ? new Map<string, Resolved | Problem>() : (shelves.get(settings) ?? new Map());
  if (settings !== null) shelves.set(settings, known);
  const key = rules.map((rule) => rule.name).join(' ');
  const resolved = known.get(key) ?? completeRules(settings, rules);
  known.set(key, resolved);
  return resolved;
}

const shelves = new WeakMap<Settings, Map<string, Resolved | Problem>>();

function completeRules(settings: Settings | null, rules: readonly Rule[]): Resolved | Problem {
  const merged = mergeRules(rules);
  const completed = completePatch(merged, settings?.path);
  const [conflict] = findConflicts(completed.treatment, merged, settings?.path);
  return conflict === undefined ? completed : conflict.problem;
}

/** A warning for each treatment whose globs hit none of the paths. */
export function unusedTreatments(settings: Settings, paths: readonly string[]): readonly Problem[] {
  return settings.rules
    .filter((rule) => rule.match !== null && !paths.some((path) => rule.hits(path)))
    .map((rule) => {
      const place = { path: settings.path, ...rule.at };
      return warning('match-unused', { glob: rule.match!.join(', '), rule: rule.name }, place);
    });
}
