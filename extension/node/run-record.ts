import { ALGORITHM } from '../../core/manifest/manifest.ts';
import { joinPath, pathBelow } from '../../core/treatment/paths/path.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { type Disk, statNumbers } from './disk.ts';
import { parentOf, relative } from './path.ts';
import type { ProjectTexture } from './project.ts';
import { cacheFile, replaceFile, type StatIndex, sha256Of } from './stat-index.ts';
import type { PresentSource } from './state.ts';

// Which textures a build found as their manifests say, so that the next one stats their files and reads none of them. One JSON
// document for each folder of manifests, beside the stat index. It is a hint like that: a damaged one is ignored, a missing one
// is made. That file and settings are what was compared, down to the last bit, is what makes it true:
//
//   form, algorithm   as this version writes them
//   treatments        SHA-256 of each treatment's canonical JSON
//   textures          by the manifest's name: [index of the treatment, sources, outputs, stats]
//     sources         [path, SHA-256], image first; the path from the manifest's folder
//     outputs         paths from the manifest's folder
//     stats           size, mtime in ms and inode of the sources, the manifest and the outputs, one after the other

export interface RunRecord {
  /** The files of a texture, if it was as its manifest says, all settings are the same since and no file's stat has moved. */
  find(
    texture: ProjectTexture,
  ): Promise<{ readonly sources: readonly PresentSource[]; readonly outputs: readonly string[] } | null>;
  /** Takes a texture that is as its manifest says, if the index trusts what it knows of each of its files. */
  keep(texture: ProjectTexture, outputs: readonly string[], index: StatIndex): Promise<void>;
  /** Keeps what was taken, if anything was. Failing is harmless. */
  save(): Promise<void>;
}

type Entry = readonly [
  treatment: number,
  sources: readonly (readonly [path: string, sha256: string])[],
  outputs: readonly string[],
  stats: readonly number[],
];

interface Page {
  readonly file: string | null;
  readonly treatments: string[];
  readonly textures: Record<string, Entry>;
  changed: boolean;
}

const FORM = 'sizeproof run record 1';

/** Opens the record of one root, kept in `cacheFolder`; `null` keeps none. */
export function openRunRecord(disk: Disk, cacheFolder: string | null, root: string): RunRecord {
  const pages = new Map<string, Page>();
  const keys = new WeakMap<Treatment, string>();
  return { find, keep, save };

  async function find(texture: ProjectTexture) {
    const { manifestPath, selected } = texture;
    const folder = parentOf(manifestPath);
    const page = await pageOf(folder);
    const entry = page.textures[nameOf(manifestPath)];
    if (entry === undefined || page.treatments[entry[0]] !== keyOf(selected.treatment)) return null;
    const [, sources, names, stats] = entry;
    if (!asksFor(texture, folder, sources)) return null;
    const outputs = names.map((name) => placeOf(folder, name));
    const paths = [...texture.sources.map(({ path }) => path), manifestPath, ...outputs];
    if (stats.length !== 3 * paths.length || !(await disk.areStill(paths, stats))) return null;
    return { sources: texture.sources.map(({ use, path }, at) => ({ use, path, sha256: sources[at][1] })), outputs };
  }

  async function keep(texture: ProjectTexture, outputs: readonly string[], index: StatIndex): Promise<void> {
    const { manifestPath, selected } = texture;
    const folder = parentOf(manifestPath);
    const page = await pageOf(folder);
    const paths = [...texture.sources.map(({ path }) => path), manifestPath, ...outputs];
    const known = paths.flatMap((path) => index.trusted(path) ?? []);
    const names = outputs.map((path) => nameFrom(folder, path));
    const ways = texture.sources.map(({ path }) => nameFrom(folder, path));
    if (known.length < paths.length || [...names, ...ways].includes(null)) return;
    const sources = ways.map((way, at) => [way as string, known[at].sha256] as const);
    const entry: Entry = [
      treatmentOf(page, selected.treatment),
      sources,
      names as string[],
      known.flatMap(statNumbers),
    ];
    page.textures[nameOf(manifestPath)] = entry;
    page.changed = true;
  }

  async function save(): Promise<void> {
    for (const { file, treatments, textures, changed } of pages.values()) {
      if (file === null || !changed) continue;
      const text = JSON.stringify({ form: FORM, algorithm: ALGORITHM, treatments, textures });
      await replaceFile(disk, file, new TextEncoder().encode(text));
    }
  }

  async function pageOf(folder: string): Promise<Page> {
    const known = pages.get(folder);
    if (known !== undefined) return known;
    const file = cacheFile(cacheFolder, root, pathBelow(root, folder) ?? folder, 'json');
    const bytes = file === null ? null : await disk.read(file);
    const page = { file, ...(bytes === null ? emptyPage() : parse(Buffer.from(bytes).toString())), changed: false };
    pages.set(folder, page);
    return page;
  }

  function treatmentOf(page: Page, treatment: Treatment): number {
    const key = keyOf(treatment);
    const at = page.treatments.indexOf(key);
    return at < 0 ? page.treatments.push(key) - 1 : at;
  }

  function keyOf(treatment: Treatment): string {
    const key = keys.get(treatment) ?? sha256Of(Buffer.from(JSON.stringify(treatment)));
    keys.set(treatment, key);
    return key;
  }
}

function emptyPage(): Pick<Page, 'treatments' | 'textures'> {
  return { treatments: [], textures: Object.create(null) };
}

/** What another version wrote, or a damaged text, is no page. */
function parse(text: string): Pick<Page, 'treatments' | 'textures'> {
  try {
    const page = JSON.parse(text);
    if (page?.form !== FORM || page.algorithm !== ALGORITHM || !Array.isArray(page.treatments)) return emptyPage();
    const textures = Object.entries(page.textures as object).filter(([, entry]) => isEntry(entry));
    return { treatments: page.treatments, textures: Object.assign(Object.create(null), Object.fromEntries(textures)) };
  } catch {
    return emptyPage();
  }
}

function isEntry(value: unknown): value is Entry {
  if (!Array.isArray(value) || value.length !== 4) return false;
  const [treatment, sources, outputs, stats] = value;
  return (
    Number.isInteger(treatment) &&
    [sources, outputs, stats].every(Array.isArray) &&
    sources.every((each: unknown) => Array.isArray(each) && each.length === 2) &&
    outputs.every((each: unknown) => typeof each === 'string')
  );
}

/** Whether the sources are those that the settings ask for now. */
function asksFor({ sources }: ProjectTexture, folder: string, recorded: Entry[1]): boolean {
  return (
    sources.length === recorded.length && sources.every(({ path }, at) => nameFrom(folder, path) === recorded[at][0])
  );
}

function nameOf(manifestPath: string): string {
  return manifestPath.slice(manifestPath.lastIndexOf('/') + 1);
}

/** A file of the folder by its name, others by the way there; `null` where there is none. */
function nameFrom(folder: string, path: string): string | null {
  return pathBelow(folder, path) ?? relative(folder, path);
}

function placeOf(folder: string, name: string): string {
  return name.startsWith('../') ? placeOf(parentOf(folder), name.slice(3)) : joinPath(folder, name);
}
