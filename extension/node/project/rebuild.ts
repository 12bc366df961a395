import { ALGORITHM, type Manifest, type ManifestSource } from '../../../core/manifest/manifest.ts';
import { type Problem, placed, Refusal, refuse } from '../../../core/problem.ts';
import { MANIFEST_ENDING, manifestPath, outputPath } from '../../../core/treatment/find/names.ts';
import { baseName, joinPath, resolvePath } from '../../../core/treatment/paths/path.ts';
import type { Disk } from '../files/disk.ts';
import { filesOf } from '../files/laydown.ts';
import { parentOf } from '../files/path.ts';
import type { JobFile, TextureJob } from '../workers/texture-job.ts';
import type { BuildReport, BuildTools, Reporter, TextureReport } from './build.ts';
import { readManifestFile } from './state.ts';
import { findTraces, sweep } from './sweep.ts';

export interface RebuildOptions {
  readonly folder: string;
  /** Manifests, or folders that are searched for them; relative ones from `folder`. */
  readonly paths: readonly string[];
  /** Where sources are looked for when the manifests were moved. */
  readonly sourceRoot: string | null;
  readonly algorithm: 'recorded' | 'new';
  readonly memoryBytes: number;
}

/** Makes outputs again from manifests and their sources alone; no settings file is read. */
export async function rebuildProject(
  options: RebuildOptions,
  tools: BuildTools,
  reporter: Reporter,
): Promise<BuildReport> {
  const problems: Problem[] = [];
  const reports: TextureReport[] = [];
  const jobs: { readonly job: TextureJob; readonly at: number }[] = [];
  const folders = new Set<string>();
  for (const path of await manifestsIn(options, tools.disk, problems)) {
    const report = { source: path, manifest: path, action: 'failed', reasons: [], outputs: [] } as const;
    try {
      const job = await planRebuild(path, options, tools.disk);
      jobs.push({ job, at: reports.length });
      reports.push({ ...report, source: job.image.path, action: 'cancelled' });
      folders.add(parentOf(path));
    } catch (error) {
      if (!(error instanceof Refusal)) throw error;
      problems.push(placed(error.problem, path));
      reports.push(report);
    }
  }
  reporter.begin(jobs.length);
  await sweep(tools.disk, (await findTraces(tools.disk, folders, 'folder')).temporaries);
  const found: Problem[][] = jobs.map(() => []);
  await tools.run(
    jobs.map(({ job }) => job),
    (index, outcome) => {
      const { at, job } = jobs[index];
      if (outcome.kind === 'built') {
        const outputs = filesOf(outcome.manifest, job.manifestPath).map(([path]) => path);
        reports[at] = { ...reports[at], action: 'built', outputs };
        found[index].push(...outcome.warnings);
      } else if (outcome.kind === 'failed') {
        reports[at] = { ...reports[at], action: 'failed' };
        found[index].push(placed(outcome.problem, job.image.path));
      }
      reporter.done(reports[at]);
    },
  );
  return {
    textures: reports,
    pruned: [],
    problems: [...problems, ...found.flat()],
    cancelled: tools.isCancelled(),
    roots: [...folders],
  };
}

async function manifestsIn(options: RebuildOptions, disk: Disk, problems: Problem[]): Promise<string[]> {
  const found = new Set<string>();
  for (const path of options.paths) {
    const whole = resolvePath(options.folder, path);
    const kind = await disk.kind(whole);
    const before = found.size;
    if (kind === 'file' && whole.endsWith(MANIFEST_ENDING)) found.add(await disk.realPath(whole));
    else if (kind === 'folder') {
      const traces = await findTraces(disk, [await disk.realPath(whole)], 'below');
      for (const manifest of [...traces.manifests].sort()) found.add(manifest);
    }
    if (found.size === before) {
      problems.push({ code: 'no-manifest', severity: 'error', values: { selector: path } });
    }
  }
  return [...found];
}

async function planRebuild(path: string, options: RebuildOptions, disk: Disk): Promise<TextureJob> {
  const { manifest, trouble } = await readManifestFile(disk, path);
  if (trouble !== null) throw new Refusal(trouble);
  if (manifest === null) return refuse('source-unreadable', { reason: 'it cannot be opened' });
  if (manifest.algorithm !== ALGORITHM && options.algorithm === 'recorded') {
    refuse('algorithm-moved', { recorded: manifest.algorithm, current: ALGORITHM });
  }
  const sources = ['image', 'roughness'].map((use) => manifest.sources.find((source) => source.use === use));
  const [image, roughness] = await Promise.all(
    sources.map((source) => (source === undefined ? null : findSource(source, manifest, path, options, disk))),
  );
  if (image === null) return refuse('manifest-damaged', { where: 'sources', expected: 'an image' });
  const { texture, outFolder } = placeOf(manifest, path, image);
  return {
    task: 'build',
    texture,
    image,
    roughness,
    treatment: manifest.settings,
    outFolder,
    manifestPath: path,
    within: outFolder,
    base: manifest.base ?? null,
    memoryBytes: options.memoryBytes,
  };
}

/** Where a recorded source is: where the manifest says, or with `sourceRoot` below that folder, under as much of the recorded
 *  path as is found there. The content is checked when it is read. */
async function findSource(
  source: ManifestSource,
  manifest: Manifest,
  path: string,
  options: RebuildOptions,
  disk: Disk,
): Promise<JobFile> {
  const file = { reference: source.path, sha256: source.sha256 };
  if (options.sourceRoot === null) {
    if (manifest.base === 'root') refuse('source-root-needed', { source: source.path });
    return { ...file, path: resolvePath(parentOf(path), source.path) };
  }
  const root = resolvePath(options.folder, options.sourceRoot);
  const names = source.path.split('/').filter((name) => name !== '..' && name !== '.');
  for (let from = 0; from < names.length; from++) {
    const candidate = joinPath(root, names.slice(from).join('/'));
    if ((await disk.kind(candidate)) === 'file') return { ...file, path: candidate };
  }
  return { ...file, path: joinPath(root, names.join('/')) };
}

/** The texture's path below its root, and the output folder. A manifest says neither, but the names of its outputs follow
 *  from the first: of all ways to cut the manifest's folder in two, the one that makes the recorded names is right. */
function placeOf(manifest: Manifest, path: string, image: JobFile): { texture: string; outFolder: string } {
  const recorded = filesOf(manifest, path).map(([file]) => file);
  const names = parentOf(path).split('/');
  for (let kept = names.length; kept >= 1; kept--) {
    const outFolder = names.slice(0, kept).join('/') || '/';
    const texture = [...names.slice(kept), baseName(image.reference)].join('/');
    const made = namesOf(manifest, texture).map((name) => resolvePath(outFolder, name));
    const isRight = made.length === recorded.length && recorded.every((file, at) => made[at] === file);
    if (isRight && resolvePath(outFolder, manifestPath(texture)) === path) return { texture, outFolder };
  }
  return refuse('manifest-damaged', { where: 'the names of outputs', expected: 'those that its settings make' });
}

/** Names of the outputs that a texture of this path would have, in the manifest's order. */
function namesOf({ levels, targets, containers, settings }: Manifest, texture: string): string[] {
  const images = [...levels, ...targets].flatMap(({ file, use, level, target, extent }) =>
    file === undefined
      ? []
      : outputPath(texture, settings, {
          use,
          ...(level !== undefined && { level }),
          ...(target !== undefined && { target }),
          extent: { width: extent[0], height: extent[1] },
          extension: 'png',
        }),
  );
  // One container for each use that has levels.
  const firsts = levels.filter((level, at) => levels.findIndex((each) => each.use === level.use) === at);
  const files = firsts
    .slice(0, containers.length)
    .map(({ use, extent: [width, height] }) =>
      outputPath(texture, settings, { use, extent: { width, height }, extension: 'ktx2' }),
    );
  return [...images, ...files];
}
