import { ALGORITHM } from '../../../core/manifest/manifest.ts';
import { MANIFEST_ENDING } from '../../../core/treatment/find/names.ts';
import { pathBelow, resolvePath } from '../../../core/treatment/paths/path.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { type Disk, statNumbers } from '../files/disk.ts';
import { parentOf, relative, startOf } from '../files/path.ts';
import type { ProjectTexture } from './project.ts';
import { cacheFile, type NewFile, replaceFiles, type StatIndex, sha256Of } from './stat-index.ts';
import type { PresentSource } from './state.ts';

// Which textures a build found as their manifests say, so that the next one stats their files and reads none of them. One file
// for each folder of manifests, beside the stat index: a line of JSON, then numbers of 64 bits in this machine's order. It is a
// hint like that: a damaged one is ignored, a missing one is made. That file and settings are what was compared, down to the
// last bit, is what makes it true:
//
//   form, algorithm   as this version writes them
//   treatments        SHA-256 of each treatment's canonical JSON
//   shapes            lists of outputs that textures share: "*.1.png" stands for the texture's name and ".1.png", "/a/b.png" for
//                     a way from the manifests' folder
//   names             of the manifests, without their ending
//   of                two numbers a manifest: which treatment, which shape
//   sources           a list a manifest: reference, SHA-256, reference, SHA-256 and so on, image first
//   numbers           size, mtime in ms and inode of the sources, the manifest and the outputs of each manifest, in this order

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

interface Entry {
  readonly treatment: number;
  readonly shape: number;
  readonly sources: readonly string[];
  readonly stats: ArrayLike<number>;
}

interface Page {
  readonly file: string | null;
  readonly treatments: string[];
  readonly shapes: (readonly string[])[];
  /** By the manifest's name without its ending. */
  readonly textures: Map<string, Entry>;
  changed: boolean;
}

const FORM = 'sizeproof run record 2';

/** Opens the record of one root, kept in `cacheFolder`; `null` keeps none. */
export function openRunRecord(disk: Disk, cacheFolder: string | null, root: string): RunRecord {
  const pages = new Map<string, Page>();
  const keys = new WeakMap<Treatment, string>();
  return { find, keep, save };

  async function find(texture: ProjectTexture) {
    const { manifestPath, selected } = texture;
    const folder = parentOf(manifestPath);
    const page = pages.get(folder) ?? (await openPage(folder));
    const name = nameOf(manifestPath);
    const entry = page.textures.get(name);
    if (entry === undefined || page.treatments[entry.treatment] !== keyOf(selected.treatment)) return null;
    if (!asksFor(texture, entry.sources)) return null;
    const start = startOf(folder);
    const outputs = page.shapes[entry.shape].map((shaped) => placeOf(start, name, shaped));
    const paths = [...texture.sources.map(({ path }) => path), manifestPath, ...outputs];
    if (entry.stats.length !== 3 * paths.length || !(await disk.areStill(paths, entry.stats))) return null;
    const sources = texture.sources.map(({ use, path }, at) => ({ use, path, sha256: entry.sources[2 * at + 1] }));
    return { sources, outputs };
  }

  async function keep(texture: ProjectTexture, outputs: readonly string[], index: StatIndex): Promise<void> {
    const { manifestPath, selected } = texture;
    const folder = parentOf(manifestPath);
    const page = pages.get(folder) ?? (await openPage(folder));
    const paths = [...texture.sources.map(({ path }) => path), manifestPath, ...outputs];
    const known = paths.flatMap((path) => index.trusted(path) ?? []);
    const name = nameOf(manifestPath);
    const shape = outputs.map((path) => shapeFrom(folder, name, path));
    if (known.length < paths.length || shape.includes(null) || texture.base !== null) return;
    page.textures.set(name, {
      treatment: positionOf(page.treatments, keyOf(selected.treatment), (key) => key),
      shape: positionOf(page.shapes, shape as string[], (each) => each.join('\n')),
      sources: texture.sources.flatMap(({ reference }, at) => [reference, known[at].sha256]),
      stats: known.flatMap(statNumbers),
    });
    page.changed = true;
  }

  async function save(): Promise<void> {
    const news: NewFile[] = [];
    for (const page of pages.values()) {
      if (page.file !== null && page.changed) news.push({ file: page.file, print: () => print(page) });
    }
    await replaceFiles(disk, news);
  }

  async function openPage(folder: string): Promise<Page> {
    const file = cacheFile(cacheFolder, root, pathBelow(root, folder) ?? folder, 'run');
    const bytes = file === null ? null : await disk.read(file);
    const page = { file, ...((bytes === null ? null : parse(bytes)) ?? emptyPage()), changed: false };
    pages.set(folder, page);
    return page;
  }

  function keyOf(treatment: Treatment): string {
    const key = keys.get(treatment) ?? sha256Of(Buffer.from(JSON.stringify(treatment)));
    keys.set(treatment, key);
    return key;
  }
}

type Content = Pick<Page, 'treatments' | 'shapes' | 'textures'>;

function emptyPage(): Content {
  return { treatments: [], shapes: [], textures: new Map() };
}

function print({ treatments, shapes, textures }: Content): Uint8Array {
  const entries = [...textures.values()];
  const line = {
    form: FORM,
    algorithm: ALGORITHM,
    treatments,
    shapes,
    names: [...textures.keys()],
    of: entries.flatMap(({ treatment, shape }) => [treatment, shape]),
    sources: entries.map((each) => each.sources),
  };
  const numbers = Float64Array.from(entries.flatMap((each) => Array.from(each.stats)));
  return Buffer.concat([Buffer.from(`${JSON.stringify(line)}\n`), Buffer.from(numbers.buffer)]);
}

/** `null` for what another version wrote, and for what is damaged. */
function parse(bytes: Uint8Array): Content | null {
  const end = bytes.indexOf(LINE_FEED);
  const line = parseLine(Buffer.from(bytes.buffer, bytes.byteOffset, Math.max(0, end)).toString());
  if (line === null || (bytes.length - end - 1) % 8 !== 0) return null;
  // Such numbers begin at a multiple of eight bytes.
  const numbers = new Float64Array(new Uint8Array(bytes.subarray(end + 1)).buffer);
  const { treatments, shapes, names, of, sources } = line;
  const textures = new Map<string, Entry>();
  let at = 0;
  for (const [index, name] of names.entries()) {
    const [treatment, shape] = [of[2 * index], of[2 * index + 1]];
    if (!Array.isArray(sources[index]) || !Array.isArray(shapes[shape])) return null;
    const next = at + 3 * (sources[index].length / 2 + 1 + shapes[shape].length);
    textures.set(name, { treatment, shape, sources: sources[index], stats: numbers.subarray(at, next) });
    at = next;
  }
  return at === numbers.length ? { treatments, shapes, textures } : null;
}

const LINE_FEED = 0x0a;

interface Line {
  readonly treatments: string[];
  readonly shapes: (readonly string[])[];
  readonly names: readonly string[];
  readonly of: readonly number[];
  readonly sources: readonly (readonly string[])[];
}

function parseLine(text: string): Line | null {
  try {
    const line = JSON.parse(text);
    if (line?.form !== FORM || line.algorithm !== ALGORITHM) return null;
    return [line.treatments, line.shapes, line.names, line.of, line.sources].every(Array.isArray) ? line : null;
  } catch {
    return null;
  }
}

/** Where a value stands in a list, which it is put into if need be; values of one key are the same. */
function positionOf<T>(list: T[], value: T, keyOf: (each: T) => string): number {
  const key = keyOf(value);
  const at = list.findIndex((each) => keyOf(each) === key);
  return at < 0 ? list.push(value) - 1 : at;
}

/** Whether the sources are those that the settings ask for now. */
function asksFor({ sources }: ProjectTexture, recorded: readonly string[]): boolean {
  return 2 * sources.length === recorded.length && sources.every(({ reference }, at) => reference === recorded[2 * at]);
}

function nameOf(manifestPath: string): string {
  return manifestPath.slice(manifestPath.lastIndexOf('/') + 1, -MANIFEST_ENDING.length);
}

/** How an output is called in a shape; `null` where there is no way from the folder to it. */
function shapeFrom(folder: string, name: string, path: string): string | null {
  const way = pathBelow(folder, path) ?? relative(folder, path);
  if (way === null) return null;
  return way.startsWith(name) ? `*${way.slice(name.length)}` : `/${way}`;
}

function placeOf(start: string, name: string, shaped: string): string {
  if (shaped.startsWith('*')) return start + name + shaped.slice(1);
  return shaped.startsWith('/../') ? resolvePath(start, shaped.slice(1)) : start + shaped.slice(1);
}
