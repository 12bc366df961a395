import { type Problem, Refusal } from '../../../core/problem.ts';
import { manifestPath } from '../../../core/treatment/find/names.ts';
import { findRoot } from '../../../core/treatment/find/root.ts';
import { type LoadedRoot, loadRoot } from '../../../core/treatment/find/root-settings.ts';
import { globMatcher } from '../../../core/treatment/paths/glob.ts';
import { joinPath, pathBelow } from '../../../core/treatment/paths/path.ts';
import { resolveTreatment } from '../../../core/treatment/resolve.ts';
import type { ReviewLimits, Treatment } from '../../../core/treatment/treatment.ts';
import { parentOf } from '../files/path.ts';
import type { EndTree } from '../git/tree.ts';

/** What the settings of one end say of a file. */
export interface SettingsOf {
  /** `output` is something that a build wrote, `excluded` no texture. */
  readonly role: 'texture' | 'output' | 'excluded';
  /** Null where the settings cannot be read; `problems` says why. */
  readonly treatment: Treatment | null;
  readonly limits: ReviewLimits | null;
  /** Absolute; null where the settings cannot be read. */
  readonly manifest: string | null;
  /** Paths are absolute. */
  readonly problems: readonly Problem[];
}

/** Looks settings up at one end, as every other door does: the nearest `sizeproof.json` up to the repository's top. Each file is
 *  read once. */
export function openSettings({ tree }: EndTree, top: string): (path: string) => Promise<SettingsOf> {
  const roots = new Map<string, Promise<LoadedRoot>>();
  const loaded = new Map<string, Promise<LoadedRoot>>();
  const excluders = new Map<LoadedRoot, (path: string) => boolean>();

  const rootOf = (folder: string): Promise<LoadedRoot> => {
    const known = roots.get(folder);
    if (known !== undefined) return known;
    const found = findRoot(tree, folder).then((place) => {
      const where = place ?? { folder: top, file: null, hidden: null };
      const root = loaded.get(where.folder) ?? loadRoot(tree, where);
      loaded.set(where.folder, root);
      return root;
    });
    roots.set(folder, found);
    return found;
  };

  return async (path) => {
    const file = joinPath(top, path);
    const root = await rootOf(parentOf(file));
    const nothing = { treatment: null, limits: null, manifest: null };
    if (root.problems.length > 0) return { role: 'texture', ...nothing, problems: root.problems };
    const below = (pathBelow(root.folder, file) ?? path).normalize('NFC');
    if (root.outFolder !== root.folder && pathBelow(root.outFolder, file.normalize('NFC')) !== null) {
      return { role: 'output', ...nothing, problems: [] };
    }
    const excludes = excluders.get(root) ?? globMatcher(root.settings?.exclude ?? []);
    excluders.set(root, excludes);
    if (excludes(below) || below.split('/').some(isSkipped)) return { role: 'excluded', ...nothing, problems: [] };
    try {
      const { treatment, review } = resolveTreatment(root.settings, below);
      const manifest = joinPath(root.outFolder, manifestPath(below));
      return { role: 'texture', treatment, limits: review, manifest, problems: [] };
    } catch (error) {
      if (error instanceof Refusal) return { role: 'texture', ...nothing, problems: [error.problem] };
      throw error;
    }
  };
}

/** As the walk for sources leaves them out. */
function isSkipped(name: string): boolean {
  return name.startsWith('.') || name === 'node_modules';
}
