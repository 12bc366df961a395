import { openSource, readSource } from '../../../core/build/source.ts';
import { buildTexture } from '../../../core/build/texture.ts';
import { wholeFile } from '../../../core/build/whole.ts';
import type { BuiltFile } from '../../../core/job.ts';
import type { Manifest, ManifestImage } from '../../../core/manifest/manifest.ts';
import { type Cancel, Cancelled, type Ports } from '../../../core/port.ts';
import { Refusal } from '../../../core/problem.ts';
import { resolvePath } from '../../../core/treatment/paths/path.ts';
import type { Disk } from '../files/disk.ts';
import { parentOf } from '../files/path.ts';
import type { JobFile, TextureJob } from '../workers/texture-job.ts';

interface Tools {
  readonly disk: Disk;
  readonly ports: Ports;
  readonly isCancelled: () => boolean;
}

/** Which of some changed outputs still hold the recorded pixels: a PNG going by its pixel hash, any other file where this
 *  machine makes those very bytes from the recorded source. */
export async function reencodedOutputs(
  paths: readonly string[],
  manifest: Manifest,
  job: TextureJob,
  tools: Tools,
): Promise<ReadonlySet<string>> {
  const same = new Set<string>();
  const rest = new Set<string>();
  for (const path of paths) {
    const image = imageAt(manifest, job.manifestPath, path);
    if (image === null) rest.add(path);
    else if ((await pixelsOf(path, tools)) === image.pixels) same.add(path);
  }
  if (rest.size > 0) for (const path of await rebuiltAlike(rest, manifest, job, tools)) same.add(path);
  return same;
}

function imageAt(manifest: Manifest, manifestPath: string, path: string): ManifestImage | null {
  const folder = parentOf(manifestPath);
  const images = [...manifest.levels, ...manifest.targets];
  return images.find((image) => image.file !== undefined && resolvePath(folder, image.file.path) === path) ?? null;
}

async function pixelsOf(path: string, { disk, ports, isCancelled }: Tools): Promise<string | null> {
  const bytes = await disk.read(path);
  if (bytes === null) return null;
  try {
    const source = openSource(path, { bytes, reference: path }, ports);
    const read = await readSource(source, 'image', ports, cancelOf(isCancelled), () => undefined);
    return read.pixels;
  } catch (error) {
    if (error instanceof Refusal) return null;
    throw error;
  }
}

/** Files that equal what the recorded build makes here; nothing is written. */
async function rebuiltAlike(
  paths: ReadonlySet<string>,
  manifest: Manifest,
  job: TextureJob,
  { disk, ports, isCancelled }: Tools,
): Promise<string[]> {
  const alike: string[] = [];
  const read = async (use: 'image' | 'roughness', file: JobFile | null) => {
    const bytes = file === null ? null : await disk.read(file.path);
    const recorded = manifest.sources.find((source) => source.use === use)?.sha256;
    if (file === null || bytes === null || hashOf(bytes, ports) !== recorded) return null;
    return { bytes, reference: file.reference };
  };
  const image = await read('image', job.image);
  const roughness = await read('roughness', job.roughness);
  if (image === null || (job.roughness !== null && roughness === null)) return alike;
  const { texture, memoryBytes } = job;
  const build = { texture, image, treatment: manifest.settings, memoryBytes };
  const compare = async (file: BuiltFile) => {
    const path = resolvePath(job.outFolder, file.path);
    if (!paths.has(path)) return;
    const present = await disk.read(path);
    if (present !== null && Buffer.compare(present, await wholeFile(file)) === 0) alike.push(path);
  };
  try {
    await buildTexture(roughness === null ? build : { ...build, roughness }, ports, cancelOf(isCancelled), compare);
  } catch (error) {
    if (!(error instanceof Refusal || error instanceof Cancelled)) throw error;
  }
  return alike;
}

function hashOf(bytes: Uint8Array, ports: Ports): string {
  const hash = ports.newHash();
  hash.update(bytes);
  return hash.hex();
}

function cancelOf(isCancelled: () => boolean): Cancel {
  return {
    get cancelled() {
      return isCancelled();
    },
  };
}
