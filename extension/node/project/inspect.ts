import type { Manifest } from '../../../core/manifest/manifest.ts';
import type { Disk } from '../files/disk.ts';
import { parentOf } from '../files/path.ts';
import { openProject } from './project.ts';
import { openStatIndex } from './stat-index.ts';
import { type Reason, readState } from './state.ts';
import { findTraces } from './sweep.ts';

/** How one texture's outputs stand to what is asked for now. Paths are absolute. */
export interface Inspection {
  readonly outFolder: string;
  readonly manifestPath: string;
  readonly manifest: Manifest | null;
  /** Empty where nothing moved. */
  readonly reasons: readonly Reason[];
  /** Outputs that are there. */
  readonly outputs: readonly string[];
}

/** Looks at one texture and its outputs, and writes nothing. Null where the path is no texture, or its settings are broken. */
export async function inspectTexture(disk: Disk, path: string): Promise<Inspection | null> {
  const project = await openProject(disk, { folder: '/', paths: [path] });
  const root = project.roots.find((each) => each.textures.length > 0);
  if (root === undefined) return null;
  const [texture] = root.textures;
  const { manifestPath } = texture;
  const index = await openStatIndex(disk, null, root.selection.folder);
  const traces = await findTraces(disk, [parentOf(manifestPath)], 'folder');
  const state = await readState(disk, index, texture, traces, 'with outputs');
  const outputs = state.outputs.flatMap((each) => (each.now === null ? [] : [each.path]));
  return { outFolder: root.outFolder, manifestPath, manifest: state.manifest, reasons: state.reasons, outputs };
}
