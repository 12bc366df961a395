import type { FileTree } from '../../port.ts';
import { type Problem, Refusal } from '../../problem.ts';
import { distinctProblems } from '../conflict-check.ts';
import { parentPath, pathBelow, resolvePath } from '../paths/path.ts';
import { resolveTreatment } from '../resolve.ts';
import type { Texture } from '../treatment.ts';
import { locate } from './locate.ts';
import { findRoot } from './root.ts';
import { type LoadedRoot, loadRoot } from './root-settings.ts';
import { type FoundSource, walkSources } from './walk.ts';

export interface Query {
  /** The working directory: absolute, "/"-separated. */
  readonly folder: string;
  /** Files, folders or globs, "/"-separated; relative ones from `folder`. */
  readonly paths: readonly string[];
  /** A settings file that replaces the walk for every path. */
  readonly settings?: string;
  /** An output folder that replaces the settings' one; it is not searched. */
  readonly out?: string;
}

export interface Selection {
  /** In the order of their folders; those without a settings file only where textures were selected. */
  readonly roots: readonly RootSelection[];
  /** Problems that belong to no root. */
  readonly problems: readonly Problem[];
}

/** A root that was met, with the textures selected in it. */
export interface RootSelection extends Omit<LoadedRoot, 'problems'> {
  /** In the order of their paths. Empty where the settings file is broken. */
  readonly textures: readonly SelectedTexture[];
  /** Of the settings file; they fail this root alone. Their paths are absolute. */
  readonly problems: readonly Problem[];
  /** Whether some PATH took in the whole root. */
  readonly extent: 'whole' | 'part';
}

export interface SelectedTexture extends Texture {
  /** Absolute, as the file system spells it. */
  readonly file: string;
}

/** Finds the textures that paths mean, each with the treatment that its nearest settings file gives it. A file that several
 *  paths mean is there once. A path that selects nothing, though no broken settings file stands in its way, is
 *  `nothing-selected`. */
export async function selectSources(tree: FileTree, query: Query): Promise<Selection> {
  const problems: Problem[] = [];
  const roots = new Map<string, Gathering>();
  const taken = new Set<string>();

  async function gather(folder: string, pathFolder: string): Promise<Gathering> {
    const place = await placeOf(tree, query, folder, pathFolder);
    const key = JSON.stringify([place.folder, place.file]);
    const known = roots.get(key) ?? { root: await loadRoot(tree, place), sources: [], extent: 'part' };
    roots.set(key, known);
    return known;
  }

  for (const path of query.paths) {
    const start = await locate(tree, query.folder, path);
    if (start !== null && 'code' in start) problems.push(start);
    let hits = 0;
    let blocked = 0;
    if (start !== null && 'folder' in start) {
      await walkSources(
        {
          tree,
          out: query.out === undefined ? null : resolvePath(query.folder, query.out),
          rootOf: async (folder) => (await gather(folder, start.folder)).root,
          found: (root, source) => {
            hits += 1;
            if (!taken.has(source.file)) gathered(roots, root).sources.push(source);
            taken.add(source.file);
          },
          broken: () => {
            blocked += 1;
          },
          report: (problem) => {
            blocked += 1;
            problems.push(problem);
          },
        },
        start,
      );
      if (start.kind === 'folder') markWhole(roots, start.folder);
    }
    const isReported = blocked > 0 || (start !== null && 'code' in start);
    if (hits === 0 && !isReported) {
      problems.push({ code: 'nothing-selected', severity: 'error', values: { selector: path } });
    }
  }
  const selected = [...roots.values()].map(finish).filter((each) => each.textures.length > 0 || each.file !== null);
  return { roots: selected.sort((a, b) => compare(a.folder, b.folder)), problems: distinctProblems(problems) };
}

interface Gathering {
  readonly root: LoadedRoot;
  readonly sources: FoundSource[];
  extent: 'whole' | 'part';
}

/** The settings file given; else the nearest; else none, and the PATH's folder is the root. A settings file that was given
 *  has its root in its own folder, if the PATH lies there. */
async function placeOf(tree: FileTree, query: Query, folder: string, pathFolder: string) {
  if (query.settings !== undefined) {
    const file = resolvePath(query.folder, query.settings);
    const own = await tree.realPath(parentPath(file) ?? file);
    return { folder: pathBelow(own, pathFolder) === null ? pathFolder : own, file, hidden: null };
  }
  return (await findRoot(tree, folder)) ?? { folder: pathFolder, file: null, hidden: null };
}

function gathered(roots: ReadonlyMap<string, Gathering>, root: LoadedRoot): Gathering {
  return [...roots.values()].find((each) => each.root === root)!;
}

function markWhole(roots: ReadonlyMap<string, Gathering>, folder: string): void {
  for (const each of roots.values()) if (pathBelow(folder, each.root.folder) !== null) each.extent = 'whole';
}

function finish({ root, sources, extent }: Gathering): RootSelection {
  const problems: Problem[] = [...root.problems];
  const textures: SelectedTexture[] = [];
  for (const { path, file } of sources.sort((a, b) => compare(a.path, b.path))) {
    try {
      textures.push({ ...resolveTreatment(root.settings, path), file });
    } catch (error) {
      if (!(error instanceof Refusal)) throw error;
      problems.push(error.problem);
    }
  }
  return { ...root, textures, problems: distinctProblems(problems), extent };
}

function compare(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}
