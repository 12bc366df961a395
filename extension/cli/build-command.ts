import { type Action, type BuildReport, buildProject, type TextureReport } from '../node/project/build.ts';
import { rebuildProject } from '../node/project/rebuild.ts';
import { cacheFolder } from '../node/project/stat-index.ts';
import { defaultMemoryBytes } from '../node/workers/memory.ts';
import type { Arguments } from './arguments.ts';
import { nameFrom } from './print.ts';
import { openProgress } from './progress.ts';
import { queryOf } from './query.ts';
import type { Result, Shell, Summary } from './shell.ts';
import { toolsOf } from './tools.ts';

/** `build`, once. */
export async function runBuild(args: Arguments, shell: Shell): Promise<Result> {
  return (await runWatched(args, shell)).result;
}

/** The same, with the roots that decide what is built, to watch them. */
export async function runWatched(
  args: Arguments,
  shell: Shell,
): Promise<{ readonly result: Result; readonly roots: readonly string[] }> {
  const memoryBytes = args.memoryBytes ?? defaultMemoryBytes();
  const report = await withProgress(shell, (progress) =>
    buildProject(
      {
        query: queryOf(args, shell),
        mode: args.flags.has('plan') ? 'plan' : 'build',
        orphans: args.flags.has('prune') ? 'prune' : 'keep',
        memoryBytes,
        cacheFolder: cacheFolder(shell.env, process.platform),
      },
      toolsOf(args, shell, memoryBytes),
      progress,
    ),
  );
  return { result: resultOf(report, shell, args.flags.has('plan') ? 'would be ' : ''), roots: report.roots };
}

/** `rebuild`. */
export async function runRebuild(args: Arguments, shell: Shell): Promise<Result> {
  const memoryBytes = args.memoryBytes ?? defaultMemoryBytes();
  const query = queryOf(args, shell);
  const report = await withProgress(shell, (progress) =>
    rebuildProject(
      {
        folder: query.folder,
        paths: query.paths,
        sourceRoot: args.sourceRoot,
        algorithm: args.flags.has('new-algorithm') ? 'new' : 'recorded',
        memoryBytes,
      },
      toolsOf(args, shell, memoryBytes),
      progress,
    ),
  );
  return resultOf(report, shell, '');
}

async function withProgress<T>(
  shell: Shell,
  run: (progress: ReturnType<typeof openProgress>) => Promise<T>,
): Promise<T> {
  const progress = openProgress(shell.stderr);
  try {
    return await run(progress);
  } finally {
    progress.clear();
  }
}

function resultOf(report: BuildReport, shell: Shell, mood: 'would be ' | ''): Result {
  const nameOf = nameFrom(shell.folder);
  const summary = summarize(report.textures);
  const pruned = report.pruned.map(nameOf);
  const lines = report.textures.flatMap((each) => lineOf(each, nameOf));
  const planned = report.textures.filter((each) => each.action === 'planned').length;
  const counted = mood === '' ? `${summary.built} built` : `${planned} would be built`;
  const prunes = pruned.length === 0 ? '' : `, ${pruned.length} ${mood}pruned`;
  const ending = report.cancelled ? ' Interrupted; build again to go on.' : '';
  return {
    // Only one voice asks for them, and of ten thousand textures they take a while.
    get textures() {
      return report.textures.map((each) => jsonOf(each, nameOf));
    },
    more: { pruned },
    problems: report.problems,
    summary,
    lines: [
      ...lines,
      ...pruned.map((each) => `${mood}pruned ${each}`),
      `${counted}, ${summary.unchanged} unchanged, ${summary.failed} failed${prunes}.${ending}`,
    ],
    cancelled: report.cancelled,
  };
}

function lineOf(texture: TextureReport, nameOf: (path: string) => string): string[] {
  const why = texture.reasons.length === 0 ? '' : ` (${texture.reasons.join(', ')})`;
  const count = texture.outputs.length === 1 ? '1 file' : `${texture.outputs.length} files`;
  switch (texture.action) {
    case 'built':
      return [`built ${nameOf(texture.source)} -> ${nameOf(texture.manifest)} and ${count}${why}`];
    case 'planned':
      return [`would build ${nameOf(texture.source)} -> ${nameOf(texture.manifest)} and ${count}${why}`];
    case 'unchanged':
    case 'failed':
    case 'cancelled':
      return [];
  }
}

function jsonOf(
  { source, manifest, action, reasons, outputs }: TextureReport,
  nameOf: (path: string) => string,
): object {
  return { source: nameOf(source), manifest: nameOf(manifest), action, reasons, outputs: outputs.map(nameOf) };
}

function summarize(textures: readonly TextureReport[]): Summary {
  const count = (action: Action) => textures.filter((each) => each.action === action).length;
  return { built: count('built'), unchanged: count('unchanged'), failed: count('failed') };
}
