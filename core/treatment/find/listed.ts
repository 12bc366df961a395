import { parse } from 'jsonc-parser';
import type { FileEntry, FileTree } from '../../port.ts';
import { joinPath } from '../paths/path.ts';
import { decodeUtf8 } from '../paths/utf8.ts';
import { MANIFEST_ENDING } from './names.ts';

/** Names, in NFC, of files in a folder that manifests of this folder list as outputs. */
export async function listedOutputs(
  tree: FileTree,
  folder: string,
  entries: readonly FileEntry[],
): Promise<ReadonlySet<string>> {
  const listed = new Set<string>();
  for (const { name } of entries) {
    // A build that was ended leaves its manifest under a second name.
    if (!name.endsWith(MANIFEST_ENDING) && !name.endsWith(`${MANIFEST_ENDING}.next`)) continue;
    const bytes = await tree.read(joinPath(folder, name));
    const text = bytes === null ? null : decodeUtf8(bytes);
    for (const path of outputsIn(text ?? '')) listed.add(path.normalize('NFC'));
  }
  return listed;
}

/** Output paths of a manifest, also of one that a merge has left in pieces: an output must never be built from. */
export function outputsIn(text: string): readonly string[] {
  const images = /"(?:levels|targets|containers)"\s*:\s*\[/g;
  const first = images.exec(text)?.index;
  if (first === undefined) return [];
  // Sources and settings, which name paths too, come before; the lists of outputs are all that follows.
  return Array.from(text.slice(first).matchAll(/"path"\s*:\s*("(?:[^"\\\n]|\\.)*")/g), (found) =>
    String(parse(found[1])),
  );
}
