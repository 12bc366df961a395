import { type Problem, Refusal } from '../../../core/problem.ts';
import {
  findCollisions,
  findOverwrites,
  foldCase,
  type TextureOutputs,
} from '../../../core/treatment/find/collisions.ts';
import { manifestPath } from '../../../core/treatment/find/names.ts';
import { walkSources } from '../../../core/treatment/find/walk.ts';
import { pathBelow, resolvePath } from '../../../core/treatment/paths/path.ts';
import type { Disk } from '../files/disk.ts';
import { parentOf } from '../files/path.ts';
import { absolute, type ProjectRoot, type ProjectTexture } from './project.ts';

/** A texture and what its build would write, or wrote. */
export interface Writing {
  readonly texture: ProjectTexture;
  /** Absolute; the manifest aside. */
  readonly outputs: readonly string[];
}

/** Outputs that two textures would write, or that would replace a source. */
export async function collisionsOf(disk: Disk, root: ProjectRoot, works: readonly Writing[]): Promise<Problem[]> {
  const lists: TextureOutputs[] = works.map((work) => ({
    texture: work.texture.selected.path,
    outputs: [work.texture.manifestPath, ...work.outputs].map((path) => pathBelow(root.outFolder, path) ?? path),
  }));
  lists.push(...(await siblingsOf(disk, root, works)));
  const outDir = pathBelow(root.selection.folder, root.outFolder);
  const overwrites = outDir === null ? [] : findOverwrites(lists, outDir);
  return [...findCollisions(lists), ...overwrites].map((each) => absolute(each, root.selection.folder));
}

/** Textures that were not asked for but stand in the way: `leaf.tga` would have the manifest of `leaf.png`, and a source may lie
 *  where an output of another goes. */
async function siblingsOf(disk: Disk, root: ProjectRoot, works: readonly Writing[]): Promise<TextureOutputs[]> {
  if (root.selection.extent === 'whole') return [];
  const selected = new Set(works.map((work) => work.texture.selected.file));
  const manifests = new Set(works.map((work) => foldCase(work.texture.manifestPath)));
  const outputs = new Set(works.flatMap((work) => work.outputs).map(foldCase));
  const siblings: TextureOutputs[] = [];
  const loaded = { ...root.selection, problems: [] };
  const folders = new Set([...selected, ...works.flatMap((work) => work.outputs)].map(parentOf));
  for (const folder of folders) {
    if (pathBelow(root.selection.folder, folder) === null) continue;
    await walkSources(
      {
        tree: disk,
        out: root.outFolder,
        rootOf: async () => loaded,
        found: (_, { path, file }) => {
          if (selected.has(file)) return;
          const manifest = manifestName(path);
          const sharesManifest = manifest !== null && manifests.has(foldCase(resolvePath(root.outFolder, manifest)));
          if (sharesManifest) siblings.push({ texture: path, outputs: [manifest] });
          else if (outputs.has(foldCase(file))) siblings.push({ texture: path, outputs: [] });
        },
        broken: () => undefined,
        // The folder is missing: there are no sources in it.
        report: () => undefined,
      },
      { folder, kind: 'folder', reach: 'folder', accepts: () => true },
    );
  }
  return siblings;
}

/** `null` for a texture that cannot be built for its name. */
function manifestName(path: string): string | null {
  try {
    return manifestPath(path);
  } catch (error) {
    if (error instanceof Refusal) return null;
    throw error;
  }
}
