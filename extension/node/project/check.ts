import { encoderFingerprint } from '../../../core/codec/encoder.ts';
import { readPointer } from '../../../core/codec/pointer.ts';
import { overHalo } from '../../../core/finding/halo-limit.ts';
import { notDownloaded, POINTER_BYTES } from '../../../core/finding/not-downloaded.ts';
import { stale } from '../../../core/finding/stale.ts';
import { judgeManifest } from '../../../core/finding/table.ts';
import type { Moved } from '../../../core/manifest/compare.ts';
import type { Ports } from '../../../core/port.ts';
import { type Problem, placed, warning } from '../../../core/problem.ts';
import type { Query } from '../../../core/treatment/find/select.ts';
import { baseName } from '../../../core/treatment/paths/path.ts';
import { unusedTreatments } from '../../../core/treatment/resolve.ts';
import type { Disk } from '../files/disk.ts';
import type { RunJobs } from '../workers/pool.ts';
import { type FoundOrphan, findOrphans, orphanProblem, orphansCanBeTold, withoutAnswered } from './orphans.ts';
import { absolute, jobFor, openEmptyRoots, openProject, type ProjectRoot, type ProjectTexture } from './project.ts';
import { reencodedOutputs } from './reencoded.ts';
import { openStatIndex } from './stat-index.ts';
import { type PresentSource, readState, type TextureState } from './state.ts';
import { findTraces } from './sweep.ts';

export interface CheckOptions {
  readonly query: Query;
  readonly look: 'with outputs' | 'without outputs';
  readonly cacheFolder: string | null;
  readonly memoryBytes: number;
  /** A path as problems name it. */
  readonly nameOf: (path: string) => string;
}

export interface CheckTools {
  readonly disk: Disk;
  /** Measures chains, where a limit asks for it. */
  readonly run: RunJobs;
  readonly ports: Ports;
  readonly isCancelled: () => boolean;
}

export type OutputState = 'same' | 're-encoded' | 'changed' | 'missing';

/** What a check found out about one texture. Paths are absolute. */
export interface CheckedTexture {
  readonly source: string;
  readonly manifest: string;
  readonly moved: readonly Moved[];
  readonly outputs: readonly { readonly path: string; readonly state: OutputState }[];
}

export interface CheckReport {
  readonly textures: readonly CheckedTexture[];
  readonly orphans: readonly FoundOrphan[];
  readonly problems: readonly Problem[];
  readonly cancelled: boolean;
}

/** Compares manifests, sources, settings, algorithm and outputs, and holds findings against their limits. Writes nothing but
 *  the stat index. */
export async function checkProject(options: CheckOptions, tools: CheckTools): Promise<CheckReport> {
  const { disk, isCancelled } = tools;
  const project = await openProject(disk, options.query);
  const checker: Checker = { ...options, ...tools, encoder: once(() => encoderFingerprint(tools.ports)) };
  const textures: CheckedTexture[] = [];
  const orphans: FoundOrphan[] = [];
  let problems = [...project.problems];
  const empty = await openEmptyRoots(disk, options.query, project);
  for (const root of [...project.roots, ...empty]) {
    const index = await openStatIndex(disk, options.cacheFolder, root.selection.folder);
    const traces = await findTraces(disk, [root.outFolder], 'below');
    const states: TextureState[] = [];
    for (const texture of root.textures) {
      if (isCancelled()) break;
      if (states.length % 256 === 255) await new Promise((turn) => setImmediate(turn));
      const state = await readState(disk, index, texture, traces, options.look);
      states.push(state);
      const judged = await judge(checker, root, texture, state);
      textures.push(judged.texture);
      problems.push(...judged.problems);
    }
    if (!isCancelled() && orphansCanBeTold(project)) {
      const present = states.flatMap((state) => state.sources);
      const found = await findOrphans(disk, root, traces, present);
      orphans.push(...found);
      problems.push(...found.map((each) => orphanProblem(each, options.nameOf)));
    }
    problems.push(...unused(root));
    await index.save();
  }
  for (const problem of await measureHalos(project.roots, options, tools)) {
    // What cannot be read has been said already.
    if (!problems.some(({ code, path }) => code === problem.code && path === problem.path)) problems.push(problem);
  }
  problems = await withoutAnswered(disk, options.query, problems, orphans);
  return { textures, orphans, problems, cancelled: isCancelled() };
}

interface Checker extends CheckOptions, CheckTools {
  /** Fingerprint of this machine's encoder. */
  readonly encoder: () => Promise<string>;
}

async function judge(
  checker: Checker,
  root: ProjectRoot,
  texture: ProjectTexture,
  state: TextureState,
): Promise<{ readonly texture: CheckedTexture; readonly problems: readonly Problem[] }> {
  const { manifest, reasons } = state;
  const source = texture.selected.file;
  const pointers = await pointersIn(checker.disk, state);
  const outputs = await judgeOutputs(checker, root, texture, state);
  const changed = outputs.filter((each) => each.state === 'changed' || each.state === 'missing');
  const isNew = reasons.includes('new');
  const moved = (['source', 'settings', 'algorithm', 'output'] as const).filter((each) => {
    if (each === 'source' && onlyPointers(state, pointers)) return false;
    if (each === 'output')
      return changed.length > 0 || isNew || state.trouble !== null || reasons.includes('interrupted');
    return reasons.includes(each);
  });
  const problems: (Problem | null)[] = [state.trouble];
  for (const [path, pointer] of pointers) problems.push({ ...pointer.problem, path });
  if (reasons.includes('interrupted')) {
    problems.push({ code: 'interrupted', severity: 'error', values: {}, path: texture.manifestPath });
  }
  if (isNew) problems.push({ code: 'not-built', severity: 'error', values: {} });
  if (manifest !== null) {
    problems.push(
      stale(
        moved,
        changed.map((each) => baseName(each.path)),
      ),
    );
    const { limits } = texture.selected.treatment;
    problems.push(...judgeManifest({ ...manifest, settings: { ...manifest.settings, limits } }));
  }
  for (const each of outputs)
    if (each.state === 're-encoded') problems.push(warning('re-encoded', {}, { path: each.path }));
  return {
    texture: { source, manifest: texture.manifestPath, moved, outputs },
    problems: problems.flatMap((each) => (each === null ? [] : placed(each, source))),
  };
}

interface FoundPointer {
  readonly oid: string;
  readonly problem: Problem;
}

/** Sources that are no images but say which image should be there. */
async function pointersIn(disk: Disk, state: TextureState): Promise<Map<string, FoundPointer>> {
  const pointers = new Map<string, FoundPointer>();
  for (const { path } of changedSources(state)) {
    const head = await disk.readHead(path, POINTER_BYTES);
    const pointer = head === null ? null : readPointer(head);
    const problem = head === null ? null : notDownloaded(head);
    if (pointer !== null && problem !== null) pointers.set(path, { oid: pointer.oid, problem });
  }
  return pointers;
}

/** Whether all that changed about the sources is that they were not fetched: their pointers name what was built from. */
function onlyPointers(state: TextureState, pointers: ReadonlyMap<string, FoundPointer>): boolean {
  const changed = changedSources(state);
  if (state.manifest === null || changed.length === 0 || state.sources.length !== state.manifest.sources.length)
    return false;
  return changed.every(({ path, use }) => pointers.get(path)?.oid === recordedHash(state, use));
}

function changedSources(state: TextureState): readonly PresentSource[] {
  return state.sources.filter(({ use, sha256 }) => sha256 !== null && sha256 !== recordedHash(state, use));
}

function recordedHash(state: TextureState, use: PresentSource['use']): string | undefined {
  return state.manifest?.sources.find((source) => source.use === use)?.sha256;
}

async function judgeOutputs(
  checker: Checker,
  root: ProjectRoot,
  texture: ProjectTexture,
  state: TextureState,
): Promise<{ readonly path: string; readonly state: OutputState }[]> {
  const different = state.outputs.filter(({ now, recorded }) => now !== null && now !== recorded);
  // Only another encoder may write other bytes for the same pixels.
  const mayDiffer = different.length > 0 && state.manifest?.encoder !== (await checker.encoder());
  const job = jobFor(texture, root, checker.memoryBytes);
  const reencoded =
    mayDiffer && state.manifest !== null
      ? await reencodedOutputs(
          different.map((each) => each.path),
          state.manifest,
          job,
          checker,
        )
      : new Set<string>();
  return state.outputs.map(({ path, now, recorded }) => {
    if (now === recorded) return { path, state: 'same' };
    if (now === null) return { path, state: 'missing' };
    return { path, state: reencoded.has(path) ? 're-encoded' : 'changed' };
  });
}

/** Halos over their limits. A chain has to be run for them, so only where a limit is set; the treatment is the present one. */
async function measureHalos(
  roots: readonly ProjectRoot[],
  options: CheckOptions,
  tools: CheckTools,
): Promise<readonly Problem[]> {
  const limited = roots.flatMap((root) =>
    root.textures.flatMap((texture) => {
      const limit = texture.selected.treatment.limits.halo;
      return limit === null ? [] : { limit, root, texture };
    }),
  );
  const jobs = limited.map(({ texture, root }) => ({
    ...jobFor(texture, root, options.memoryBytes),
    task: 'measure' as const,
  }));
  const found: (Problem | null)[] = limited.map(() => null);
  await tools.run(jobs, (index, outcome) => {
    const { limit, texture, root } = limited[index];
    if (outcome.kind === 'measured') found[index] = overHalo(outcome.halos, limit);
    if (outcome.kind === 'failed') found[index] = absolute(outcome.problem, root.selection.folder);
    found[index] = found[index] && placed(found[index], texture.selected.file);
  });
  return found.flatMap((each) => each ?? []);
}

function unused(root: ProjectRoot): readonly Problem[] {
  const { settings, extent } = root.selection;
  if (settings === null || extent === 'part') return [];
  return unusedTreatments(
    settings,
    root.textures.map((texture) => texture.selected.path),
  );
}

function once<T>(make: () => Promise<T>): () => Promise<T> {
  let made: Promise<T> | null = null;
  return () => {
    made ??= make();
    return made;
  };
}
