import { type Problem, Refusal, warning } from '../problem.ts';
import { completePatch } from './complete.ts';
import { findConflicts } from './conflict-check.ts';
import { mergedFor } from './merge.ts';
import type { Settings } from './settings.ts';
import type { Texture } from './treatment.ts';

/** What applies to a texture, every leaf with the rule that set it. `texturePath` is relative to the root, "/"-separated,
 *  in NFC; without settings the built-in defaults apply. Throws Refusal where rules contradict each other for this texture. */
export function resolveTreatment(settings: Settings | null, texturePath: string): Texture {
  const merged = mergedFor(settings, texturePath);
  const { treatment, origins } = completePatch(merged, settings?.path);
  const [conflict] = findConflicts(treatment, merged, settings?.path);
  if (conflict !== undefined) throw new Refusal(conflict.problem);
  return { path: texturePath, treatment, origins };
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
