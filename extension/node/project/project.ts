import { type Problem, Refusal } from '../../../core/problem.ts';
import { manifestPath, sourcePath } from '../../../core/treatment/find/names.ts';
import { findRoot } from '../../../core/treatment/find/root.ts';
import { loadRoot } from '../../../core/treatment/find/root-settings.ts';
import {
  type Query,
  type RootSelection,
  type SelectedTexture,
  selectSources,
} from '../../../core/treatment/find/select.ts';
import { baseName, pathBelow, resolvePath } from '../../../core/treatment/paths/path.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import type { Disk } from '../files/disk.ts';
import { parentOf, relative } from '../files/path.ts';
import type { TextureJob } from '../workers/texture-job.ts';

/** The roots that paths lead to, and where the outputs of each go. */
export interface Project {
  readonly roots: readonly ProjectRoot[];
  /** Of settings files and paths. Paths are absolute. */
  readonly problems: readonly Problem[];
}

export interface ProjectRoot {
  readonly selection: RootSelection;
  readonly outFolder: string;
  /** The folder that no output may leave. */
  readonly within: string;
  readonly textures: readonly ProjectTexture[];
  /** Folders that the paths named: what lies below them is asked for, also when it is gone. */
  readonly scopes: readonly string[];
}

/** A texture with everything that decides its outputs. Paths are absolute. */
export interface ProjectTexture {
  readonly selected: SelectedTexture;
  readonly manifestPath: string;
  readonly sources: readonly SourceReference[];
  /** Whether references are relative to the root for want of a way from the manifest. */
  readonly base: 'root' | null;
}

export interface SourceReference {
  readonly use: 'image' | 'roughness';
  readonly path: string;
  /** As the manifest writes it. */
  readonly reference: string;
}

/** Finds what the query asks for. With `out`, several roots are the usage error `several-roots`, and none is answered. */
export async function openProject(disk: Disk, query: Query): Promise<Project> {
  const { roots, problems } = await selectSources(disk, query);
  const out = query.out === undefined ? null : resolvePath(query.folder, query.out);
  const busy = roots.filter((root) => root.textures.length > 0);
  if (out !== null && busy.length > 1) {
    const values = { count: busy.length, roots: busy.map((root) => root.folder).join(', ') };
    return { roots: [], problems: [...problems, { code: 'several-roots', severity: 'error', values }] };
  }
  const scopes = await foldersOf(disk, query);
  const all = [...problems];
  const opened = roots.map((selection) => openRoot(selection, out, scopes, all));
  return { roots: opened, problems: all };
}

/** A problem whose path is relative to a root, with its absolute path. */
export function absolute(problem: Problem, folder: string): Problem {
  return problem.path === undefined ? problem : { ...problem, path: resolvePath(folder, problem.path) };
}

/** What a worker is asked to do for a texture. */
export function jobFor(texture: ProjectTexture, root: ProjectRoot, memoryBytes: number): TextureJob {
  const [image, roughness] = ['image', 'roughness'].map((use) => texture.sources.find((each) => each.use === use));
  if (image === undefined) throw new TypeError('Expected an image among the sources of a texture');
  return {
    task: 'build',
    texture: texture.selected.path,
    image: { path: image.path, reference: image.reference, sha256: null },
    roughness: roughness === undefined ? null : { path: roughness.path, reference: roughness.reference, sha256: null },
    treatment: texture.selected.treatment,
    outFolder: root.outFolder,
    manifestPath: texture.manifestPath,
    within: root.within,
    base: texture.base,
    memoryBytes,
  };
}

/** Roots of folders that were named and hold no texture any more: their manifests are still to be judged. */
export async function openEmptyRoots(disk: Disk, query: Query, project: Project): Promise<ProjectRoot[]> {
  const out = query.out === undefined ? null : resolvePath(query.folder, query.out);
  const scopes = await foldersOf(disk, query);
  const empty = scopes.filter((scope) => project.roots.every((root) => !touches(root.selection.folder, scope)));
  const roots = new Map<string, ProjectRoot>();
  for (const scope of empty) {
    const given = query.settings === undefined ? null : resolvePath(query.folder, query.settings);
    const place =
      given !== null
        ? { folder: await disk.realPath(parentOf(given)), file: given, hidden: null }
        : ((await findRoot(disk, scope)) ?? { folder: scope, file: null, hidden: null });
    const root = await loadRoot(disk, place);
    if (root.problems.length > 0) continue;
    roots.set(root.folder, openRoot({ ...root, textures: [], extent: 'part' }, out, scopes, []));
  }
  return [...roots.values()];
}

/** Where a manifest says its source is, seen from the manifest's folder. */
export function referenceTo(
  path: string,
  manifest: string,
  root: string,
): { readonly reference: string; readonly base: 'root' | null } {
  const way = wayBetween(parentOf(manifest), parentOf(path));
  if (way !== null) return { reference: joinWay(way, baseName(path)).normalize('NFC'), base: null };
  return { reference: (pathBelow(root, path) ?? path).normalize('NFC'), base: 'root' };
}

/** Thousands of textures lie in a few folders: the way of the last two is kept. */
function wayBetween(from: string, to: string): string | null {
  if (from !== lastWay.from || to !== lastWay.to) lastWay = { from, to, way: relative(from, to) };
  return lastWay.way;
}

let lastWay: { readonly from: string; readonly to: string; readonly way: string | null } = {
  from: '',
  to: '',
  way: null,
};

function joinWay(way: string, name: string): string {
  return way === '.' ? name : `${way}/${name}`;
}

function openRoot(
  selection: RootSelection,
  out: string | null,
  scopes: readonly string[],
  problems: Problem[],
): ProjectRoot {
  const outFolder = out ?? selection.outFolder;
  problems.push(...selection.problems.map((each) => absolute(each, selection.folder)));
  const textures = selection.textures.flatMap((selected) => {
    try {
      return openTexture(selected, selection.folder, outFolder);
    } catch (error) {
      if (!(error instanceof Refusal)) throw error;
      problems.push(absolute(error.problem, selection.folder));
      return [];
    }
  });
  const touched = scopes.filter((scope) => touches(selection.folder, scope));
  return { selection, outFolder, within: out ?? selection.folder, scopes: touched, textures };
}

function openTexture(selected: SelectedTexture, root: string, outFolder: string): ProjectTexture {
  const manifest = resolvePath(outFolder, manifestPath(selected.path));
  const roughness = roughnessMap(selected.treatment);
  const paths: Pick<SourceReference, 'use' | 'path'>[] = [{ use: 'image', path: selected.file }];
  if (roughness !== null) {
    paths.push({ use: 'roughness', path: resolvePath(root, sourcePath(roughness, selected.path)) });
  }
  const found = paths.map((each) => ({ ...each, ...referenceTo(each.path, manifest, root) }));
  return {
    selected,
    manifestPath: manifest,
    sources: found.map(({ use, path, reference }) => ({ use, path, reference })),
    base: found[0].base,
  };
}

/** The pattern of the roughness map's path, where the treatment names one. */
function roughnessMap(treatment: Treatment): string | null {
  const { roughness } = treatment.normal;
  return roughness !== null && 'path' in roughness ? roughness.path : null;
}

async function foldersOf(disk: Disk, query: Query): Promise<string[]> {
  const folders: string[] = [];
  for (const path of query.paths) {
    const whole = resolvePath(query.folder, path);
    if ((await disk.kind(whole)) === 'folder') folders.push(await disk.realPath(whole));
  }
  return folders;
}

/** Whether one of two folders lies in the other. */
function touches(a: string, b: string): boolean {
  return pathBelow(a, b) !== null || pathBelow(b, a) !== null;
}
