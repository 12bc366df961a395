import type { Manifest } from './manifest.ts';

/** A manifest whose texture is no longer built. */
export interface Orphan {
  /** Of the manifest, as the door names it. */
  readonly manifest: string;
  /** The source it was built from, as the door names it. */
  readonly source: string;
  /** The texture that holds the same bytes now, where there is one: the source was moved there. */
  readonly movedTo?: string;
}

/** Sources by content, to find where an orphan's source went. Of equal sources the first path in code-unit order counts. */
export function sourcesByHash(
  sources: Iterable<{ readonly path: string; readonly sha256: string | null }>,
): Map<string, string> {
  const found = new Map<string, string>();
  for (const { path, sha256 } of sources) {
    if (sha256 === null) continue;
    const known = found.get(sha256);
    if (known === undefined || path < known) found.set(sha256, path);
  }
  return found;
}

/** Where the source of an orphaned manifest is now, going by its hash. */
export function movedTo(manifest: Manifest, byHash: ReadonlyMap<string, string>): string | undefined {
  const image = manifest.sources.find((source) => source.use === 'image');
  return image === undefined ? undefined : byHash.get(image.sha256);
}
