import type { BuildPlan } from '../../../core/job.ts';
import { type Problem, placed, Refusal } from '../../../core/problem.ts';
import type { Query } from '../../../core/treatment/find/select.ts';
import { resolvePath } from '../../../core/treatment/paths/path.ts';
import type { Disk } from '../files/disk.ts';
import { filesOf } from '../files/laydown.ts';
import { parentOf } from '../files/path.ts';
import { planFromHead } from '../workers/plan-job.ts';
import type { RunJobs } from '../workers/pool.ts';
import type { Outcome, TextureJob } from '../workers/texture-job.ts';
import { collisionsOf } from './collisions.ts';
import { type FolderRecord, openFolderRecord } from './folder-record.ts';
import { type FoundOrphan, findOrphans, orphansCanBeTold, prune, withoutAnswered } from './orphans.ts';
import { absolute, jobFor, openEmptyRoots, openProject, type ProjectRoot, type ProjectTexture } from './project.ts';
import { openRunRecord, type RunRecord } from './run-record.ts';
import { openStatIndex, type StatIndex } from './stat-index.ts';
import { type PresentSource, type Reason, readState, type TextureState } from './state.ts';
import { findTraces, sweep, type Traces } from './sweep.ts';

export interface BuildOptions {
  readonly query: Query;
  /** `plan` writes nothing. */
  readonly mode: 'build' | 'plan';
  readonly orphans: 'keep' | 'prune';
  /** Bytes that one texture may hold. */
  readonly memoryBytes: number;
  /** Where the stat index is kept; `null` keeps none. */
  readonly cacheFolder: string | null;
}

export interface BuildTools {
  readonly disk: Disk;
  readonly run: RunJobs;
  readonly isCancelled: () => boolean;
}

/** Hears how a build goes on. */
export interface Reporter {
  /** Textures to build are known. */
  begin(count: number): void;
  /** One more is done. */
  done(texture: TextureReport): void;
}

export type Action = 'built' | 'unchanged' | 'failed' | 'planned' | 'cancelled';

/** What became of one texture. Paths are absolute. */
export interface TextureReport {
  readonly source: string;
  readonly manifest: string;
  readonly action: Action;
  readonly reasons: readonly Reason[];
  /** Files that its build writes or wrote, the manifest aside; empty where that is not known. */
  readonly outputs: readonly string[];
}

export interface BuildReport {
  /** In the order of roots and paths. */
  readonly textures: readonly TextureReport[];
  /** Manifests that were, or would be, removed with their outputs. */
  readonly pruned: readonly string[];
  readonly problems: readonly Problem[];
  readonly cancelled: boolean;
  /** Folders whose files decide what is built. */
  readonly roots: readonly string[];
}

/** Builds what moved. One bad file does not stop the others; names that collide stop their root, before anything is built. */
export async function buildProject(options: BuildOptions, tools: BuildTools, reporter: Reporter): Promise<BuildReport> {
  const project = await openProject(tools.disk, options.query);
  let problems = [...project.problems];
  const rooms: RootBuild[] = [];
  const pruned: string[] = [];
  for (const root of project.roots) {
    const room = await judgeRoot(root, options, tools);
    problems.push(...room.problems);
    rooms.push(room);
  }
  const works = rooms.flatMap((room) => room.works);
  const jobs = works.filter((work) => work.job !== null);
  reporter.begin(jobs.length);
  if (options.mode === 'build' && jobs.length > 0) {
    const outcomes = tools.run(
      jobs.map((work) => work.job as TextureJob),
      (index, outcome) => {
        take(jobs[index], outcome);
        if (outcome.kind === 'built') learn(jobs[index], outcome);
        reporter.done(reportOf(jobs[index]));
      },
    );
    await outcomes;
  }
  for (const work of works) problems.push(...work.problems);
  if (options.mode === 'build' && works.some((work) => work.problems.some((each) => each.code === 'worker-ended'))) {
    // A worker that ended could not tidy up after itself, and no other runs any more.
    for (const room of rooms) {
      const traces = await findTraces(tools.disk, foldersOf(room.works), 'folder');
      await sweep(tools.disk, traces.temporaries);
    }
  }
  const cancelled = tools.isCancelled();
  if (options.orphans === 'prune' && !cancelled && orphansCanBeTold(project)) {
    const empty = await openEmptyRoots(tools.disk, options.query, project);
    const found: FoundOrphan[] = [];
    for (const root of [...rooms.map((room) => room.root), ...empty]) {
      const room = rooms.find((each) => each.root === root);
      found.push(...(await pruneRoot(root, room, options, tools, problems)));
    }
    pruned.push(...found.map((orphan) => orphan.manifest));
    problems = await withoutAnswered(tools.disk, options.query, problems, found);
  }
  for (const room of rooms) if (options.mode === 'build') await remember(room);
  const roots = project.roots.map((root) => root.selection.folder);
  return { textures: works.map(reportOf), pruned, problems, cancelled, roots };
}

interface RootBuild {
  readonly root: ProjectRoot;
  readonly index: StatIndex;
  readonly record: RunRecord;
  readonly folderRecord: FolderRecord;
  readonly works: readonly Work[];
  readonly problems: readonly Problem[];
}

interface Work {
  readonly texture: ProjectTexture;
  readonly root: ProjectRoot;
  readonly index: StatIndex;
  readonly state: TextureState;
  action: Action;
  /** `null` where there is nothing to do. */
  job: TextureJob | null;
  /** Absolute. */
  outputs: readonly string[];
  readonly problems: Problem[];
}

/** Textures looked at before the event loop has a turn: a signal must not wait for ten thousand. */
const TURN = 256;

async function judgeRoot(root: ProjectRoot, options: BuildOptions, tools: BuildTools): Promise<RootBuild> {
  const { disk } = tools;
  const index = await openStatIndex(disk, options.cacheFolder, root.selection.folder);
  const record = openRunRecord(disk, options.cacheFolder, root.selection.folder);
  const whole = root.selection.extent === 'whole' || options.orphans === 'prune';
  const folders = new Set(root.textures.map((texture) => parentOf(texture.manifestPath)));
  const folderRecord = await openFolderRecord(disk, options.cacheFolder, root.selection.folder);
  const places = whole ? [root.outFolder] : folders;
  const traces = await findTraces(disk, places, whole ? 'below' : 'folder', folderRecord.look);
  const works: Work[] = [];
  for (const texture of root.textures) {
    if (tools.isCancelled()) break;
    if (works.length % TURN === TURN - 1) await new Promise((turn) => setImmediate(turn));
    works.push(
      (await known(texture, root, index, record, traces)) ?? (await judge(texture, root, index, traces, options, disk)),
    );
  }
  // Where nothing is written, nothing collides that did not when it was.
  const problems = works.some((work) => work.job !== null) ? await collisionsOf(disk, root, works) : [];
  if (problems.length > 0) {
    for (const work of works) {
      if (work.job !== null) work.action = 'failed';
      work.job = null;
    }
  } else if (options.mode === 'build' && works.some((work) => work.job !== null)) {
    const others = whole ? null : await findTraces(disk, foldersOf(works), 'folder');
    await sweep(disk, new Set([...traces.temporaries, ...(others?.temporaries ?? [])]));
  } else if (options.mode === 'build') {
    await sweep(disk, traces.temporaries);
  }
  return { root, index, record, folderRecord, works, problems };
}

/** A texture of which every file is as the last run that looked into it left it. */
async function known(
  texture: ProjectTexture,
  root: ProjectRoot,
  index: StatIndex,
  record: RunRecord,
  traces: Traces,
): Promise<Work | null> {
  if (!traces.manifests.has(texture.manifestPath) || traces.interrupted.has(texture.manifestPath)) return null;
  const found = await record.find(texture);
  if (found === null) return null;
  const state: TextureState = { manifest: null, reasons: [], trouble: null, sources: found.sources, outputs: [] };
  return { texture, root, index, state, action: 'unchanged', job: null, outputs: found.outputs, problems: [] };
}

/** What was written, if the source that it was made from is the one that was looked at. */
function learn({ state, index }: Work, { manifest, files }: Outcome & { readonly kind: 'built' }): void {
  const isSame = manifest.sources.every(({ use, sha256 }) =>
    state.sources.some((each) => each.use === use && each.sha256 === sha256),
  );
  if (isSame) for (const { path, sha256, stat } of files) index.learn(path, sha256, stat);
}

/** Keeps what this run learned about a root, for the next. */
async function remember({ index, record, folderRecord, works }: RootBuild): Promise<void> {
  await index.settle();
  for (const { texture, action, state, outputs } of works) {
    const wasLookedInto = action === 'built' || (action === 'unchanged' && state.manifest !== null);
    if (wasLookedInto) await record.keep(texture, outputs, index);
  }
  await record.save();
  await folderRecord.save();
  await index.save();
}

async function judge(
  texture: ProjectTexture,
  root: ProjectRoot,
  index: StatIndex,
  traces: Traces,
  options: BuildOptions,
  disk: Disk,
): Promise<Work> {
  // Hashed before it is read: a manifest that changes in between is noticed by the next run.
  if (traces.manifests.has(texture.manifestPath)) await index.hash(texture.manifestPath);
  const state = await readState(disk, index, texture, traces, 'with outputs');
  const work: Work = { texture, root, index, state, action: 'unchanged', job: null, outputs: [], problems: [] };
  if (state.manifest !== null) work.outputs = state.outputs.map((output) => output.path);
  if (state.reasons.length === 0) return work;
  try {
    // A newer version's manifest knows what this one does not; it is not overwritten.
    if (state.trouble?.code === 'manifest-newer') throw new Refusal(state.trouble);
    checkThere(state);
    const plan = await planWork(disk, texture);
    work.outputs = plan.files.map((file) => resolvePath(root.outFolder, file.path));
    work.job = jobFor(texture, root, options.memoryBytes);
    work.action = 'planned';
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    work.action = 'failed';
    work.problems.push(absolute(placed(error.problem, texture.selected.file), root.selection.folder));
  }
  return work;
}

async function planWork(disk: Disk, { selected }: ProjectTexture): Promise<BuildPlan> {
  return planFromHead(disk, selected.path, selected.file, selected.treatment);
}

function checkThere(state: TextureState): void {
  for (const { path, sha256 } of state.sources) {
    if (sha256 !== null) continue;
    throw new Refusal({ code: 'source-missing', severity: 'error', values: {}, path });
  }
}

function take(work: Work, outcome: Outcome): void {
  switch (outcome.kind) {
    case 'built':
      work.action = 'built';
      work.outputs = filesOf(outcome.manifest, work.texture.manifestPath).map(([path]) => path);
      work.problems.push(...outcome.warnings);
      return;
    case 'failed':
      work.action = 'failed';
      work.problems.push(absolute(outcome.problem, work.root.selection.folder));
      return;
    case 'cancelled':
      work.action = 'cancelled';
      return;
    case 'measured':
      throw new TypeError('Expected a build but received a measurement');
  }
}

function reportOf(work: Work): TextureReport {
  return {
    source: work.texture.selected.file,
    manifest: work.texture.manifestPath,
    action: work.action,
    reasons: work.state.reasons,
    outputs: work.outputs,
  };
}

function foldersOf(works: readonly Work[]): Set<string> {
  return new Set(works.flatMap((work) => [work.texture.manifestPath, ...work.outputs]).map(parentOf));
}

async function pruneRoot(
  root: ProjectRoot,
  room: RootBuild | undefined,
  options: BuildOptions,
  tools: BuildTools,
  problems: Problem[],
): Promise<FoundOrphan[]> {
  const traces = await findTraces(tools.disk, [root.outFolder], 'below');
  const present: PresentSource[] = (room?.works ?? []).flatMap((work) => work.state.sources);
  const orphans: FoundOrphan[] = await findOrphans(tools.disk, root, traces, present);
  const kept = new Set((room?.works ?? []).flatMap((work) => [work.texture.manifestPath, ...work.outputs]));
  for (const orphan of orphans) {
    if (options.mode === 'plan') continue;
    try {
      problems.push(...(await prune(tools.disk, root, orphan, kept)));
    } catch (error) {
      if (!(error instanceof Refusal)) throw error;
      problems.push(error.problem);
    }
  }
  return orphans;
}
