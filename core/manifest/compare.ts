import type { Treatment } from '../treatment/treatment.ts';
import { ALGORITHM, type Manifest, type ManifestFile, type ManifestImage } from './manifest.ts';
import { sameSettings } from './settings.ts';

/** What of a built texture is no longer what its manifest says. */
export type Moved = 'source' | 'settings' | 'algorithm' | 'output';

/** What is there now. Paths are the manifest's own; a missing file is `null`. */
export interface Present {
  /** The sources that the settings ask for now. */
  readonly sources: readonly {
    readonly path: string;
    readonly use: 'image' | 'roughness';
    readonly sha256: string | null;
  }[];
  /** `null` where no settings apply any more: the texture is not built now. */
  readonly settings: Treatment | null;
  /** `null` leaves outputs out of it. */
  readonly outputs: ReadonlyMap<string, string | null> | null;
}

/** Which of source, settings, algorithm and output moved, in this order. The encoder is no reason: only the pixels are promised. */
export function compareManifest(manifest: Manifest, present: Present): Moved[] {
  const moved: Moved[] = [];
  if (!sameSources(manifest, present)) moved.push('source');
  if (present.settings === null || !sameSettings(manifest.settings, present.settings)) moved.push('settings');
  if (manifest.algorithm !== ALGORITHM) moved.push('algorithm');
  if (present.outputs !== null && movedOutputs(manifest, present.outputs).length > 0) moved.push('output');
  return moved;
}

/** Every file that the manifest lists as output, in its order. */
export function manifestFiles(manifest: Manifest): ManifestFile[] {
  const images: ManifestImage[] = [...manifest.levels, ...manifest.targets];
  return [...images.flatMap((image) => image.file ?? []), ...manifest.containers];
}

/** The outputs that are missing or hold other bytes than recorded. */
export function movedOutputs(manifest: Manifest, hashes: ReadonlyMap<string, string | null>): ManifestFile[] {
  return manifestFiles(manifest).filter((file) => hashes.get(file.path) !== file.sha256);
}

function sameSources(manifest: Manifest, present: Present): boolean {
  if (manifest.sources.length !== present.sources.length) return false;
  return manifest.sources.every((recorded) => {
    const now = present.sources.find((each) => each.use === recorded.use);
    return now !== undefined && now.path === recorded.path && now.sha256 === recorded.sha256;
  });
}
