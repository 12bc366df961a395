import type * as vscode from 'vscode';
import type { Problem } from '../../../core/problem.ts';
import { Refusal } from '../../../core/problem.ts';
import { findRoot } from '../../../core/treatment/find/root.ts';
import { type LoadedRoot, loadRoot } from '../../../core/treatment/find/root-settings.ts';
import { parentPath, pathBelow } from '../../../core/treatment/paths/path.ts';
import { resolveTreatment } from '../../../core/treatment/resolve.ts';
import type { Texture } from '../../../core/treatment/treatment.ts';
import { type FilePlace, placeOf } from '../files/place.ts';
import type { Platform } from '../platform.ts';

/** What the settings say about one file, read as they are typed. */
export interface TextureSettings {
  readonly place: FilePlace;
  readonly root: LoadedRoot;
  /** Absolute, links of its folder resolved. */
  readonly file: string;
  /** Root-relative. */
  readonly path: string;
  /** Null where they cannot be read; the problems say why. */
  readonly texture: Texture | null;
  readonly problems: readonly Problem[];
}

/** The settings of a texture: the nearest file's, else the built-in defaults. */
export async function settingsOf(resource: vscode.Uri, platform: Platform): Promise<TextureSettings> {
  const place = placeOf(resource, platform);
  const given = place.pathOf(resource);
  const folder = await place.tree.realPath(parentPath(given) ?? given);
  const file = `${folder === '/' ? '' : folder}/${given.slice(given.lastIndexOf('/') + 1)}`;
  const found = (await findRoot(place.tree, folder)) ?? { folder, file: null, hidden: null };
  const root = await loadRoot(place.tree, found);
  const path = (pathBelow(root.folder, file) ?? file).normalize('NFC');
  if (root.problems.length > 0) return { place, root, file, path, texture: null, problems: root.problems };
  try {
    return { place, root, file, path, texture: resolveTreatment(root.settings, path), problems: [] };
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    return { place, root, file, path, texture: null, problems: [error.problem] };
  }
}
