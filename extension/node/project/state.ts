import { compareManifest, type Moved, manifestFiles } from '../../../core/manifest/compare.ts';
import type { Manifest } from '../../../core/manifest/manifest.ts';
import { readManifest } from '../../../core/manifest/read.ts';
import { type Problem, Refusal } from '../../../core/problem.ts';
import type { Disk } from '../files/disk.ts';
import { filesOf } from '../files/laydown.ts';
import type { ProjectTexture } from './project.ts';
import type { StatIndex } from './stat-index.ts';
import type { Traces } from './sweep.ts';

/** Why a texture is to be built. `new`: there is no manifest. `manifest`: it cannot be read. */
export type Reason = 'new' | 'manifest' | 'interrupted' | Moved;

/** How a texture's outputs stand to what is asked for now. */
export interface TextureState {
  readonly manifest: Manifest | null;
  /** Empty where nothing moved. */
  readonly reasons: readonly Reason[];
  /** Why the manifest cannot be read. */
  readonly trouble: Problem | null;
  readonly sources: readonly PresentSource[];
  readonly outputs: readonly PresentOutput[];
}

export interface PresentSource {
  readonly use: 'image' | 'roughness';
  readonly path: string;
  readonly sha256: string | null;
}

export interface PresentOutput {
  readonly path: string;
  readonly recorded: string;
  /** `null` for a missing file. */
  readonly now: string | null;
}

/** Compares a texture with its manifest. Unchanged files cost a stat each. */
export async function readState(
  disk: Disk,
  index: StatIndex,
  texture: ProjectTexture,
  traces: Traces,
  look: 'with outputs' | 'without outputs',
): Promise<TextureState> {
  const { manifest, trouble } = traces.manifests.has(texture.manifestPath)
    ? await readManifestFile(disk, texture.manifestPath)
    : { manifest: null, trouble: null };
  const sources: PresentSource[] = [];
  for (const { use, path } of texture.sources) sources.push({ use, path, sha256: await index.hash(path) });
  const outputs: PresentOutput[] = [];
  if (manifest !== null && look === 'with outputs') {
    for (const [path, recorded] of filesOf(manifest, texture.manifestPath)) {
      outputs.push({ path, recorded, now: await index.hash(path) });
    }
  }
  const reasons: Reason[] = manifest !== null ? moved(manifest, texture, sources, outputs, look) : [];
  if (manifest === null) reasons.push(trouble === null ? 'new' : 'manifest');
  if (traces.interrupted.has(texture.manifestPath)) reasons.unshift('interrupted');
  return { manifest, reasons, trouble, sources, outputs };
}

/** Reads a manifest, or says why it cannot be. */
export async function readManifestFile(
  disk: Disk,
  path: string,
): Promise<
  | { readonly manifest: Manifest; readonly trouble: null }
  | { readonly manifest: null; readonly trouble: Problem | null }
> {
  const bytes = await disk.read(path);
  if (bytes === null) return { manifest: null, trouble: null };
  try {
    return { manifest: readManifest(new TextDecoder().decode(bytes), path), trouble: null };
  } catch (error) {
    if (error instanceof Refusal) return { manifest: null, trouble: error.problem };
    throw error;
  }
}

function moved(
  manifest: Manifest,
  texture: ProjectTexture,
  sources: readonly PresentSource[],
  outputs: readonly PresentOutput[],
  look: 'with outputs' | 'without outputs',
): Moved[] {
  const referenced = texture.sources.map(({ use, reference }, at) => ({
    use,
    path: reference,
    sha256: sources[at].sha256,
  }));
  const names = manifestFiles(manifest).map((file) => file.path);
  const found = compareManifest(manifest, {
    sources: referenced,
    settings: texture.selected.treatment,
    outputs: look === 'with outputs' ? new Map(outputs.map((each, at) => [names[at], each.now])) : null,
  });
  const baseMoved = (manifest.base ?? null) !== texture.base;
  return baseMoved && !found.includes('source') ? ['source', ...found] : found;
}
