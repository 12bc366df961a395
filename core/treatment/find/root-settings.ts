import type { FileTree } from '../../port.ts';
import type { Problem } from '../../problem.ts';
import { joinPath } from '../paths/path.ts';
import { decodeUtf8 } from '../paths/utf8.ts';
import { DEFAULT_OUT_DIR, type ParsedSettings, parseSettings, type Settings } from '../settings.ts';

/** A root with its settings read. */
export interface LoadedRoot {
  /** Absolute. */
  readonly folder: string;
  /** Absolute path of the settings file; null where the built-in defaults apply. */
  readonly file: string | null;
  readonly hidden: string | null;
  readonly settings: Settings | null;
  /** Problems of the settings file; any of them fails the whole root. */
  readonly problems: readonly Problem[];
  /** Absolute. */
  readonly outFolder: string;
}

export async function loadRoot(
  tree: FileTree,
  place: { readonly folder: string; readonly file: string | null; readonly hidden: string | null },
): Promise<LoadedRoot> {
  const { settings, problems } = place.file === null ? noSettings : await readSettings(tree, place.file);
  const outFolder = joinPath(place.folder, settings?.outDir ?? DEFAULT_OUT_DIR);
  return { ...place, settings, problems, outFolder };
}

const noSettings: ParsedSettings = { settings: null, problems: [] };

async function readSettings(tree: FileTree, path: string): Promise<ParsedSettings> {
  const bytes = await tree.read(path);
  if (bytes === null) return failed('settings-unreadable', path);
  const text = decodeUtf8(bytes);
  return text === null ? failed('settings-encoding', path) : parseSettings(text, path);
}

function failed(code: 'settings-unreadable' | 'settings-encoding', path: string): ParsedSettings {
  return { settings: null, problems: [{ code, severity: 'error', values: {}, path }] };
}
