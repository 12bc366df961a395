import { nodePorts } from '../node/ports/ports.ts';
import { type CheckedTexture, checkProject } from '../node/project/check.ts';
import { cacheFolder } from '../node/project/stat-index.ts';
import { defaultMemoryBytes } from '../node/workers/memory.ts';
import type { Arguments } from './arguments.ts';
import { nameFrom } from './print.ts';
import { queryOf } from './query.ts';
import type { Result, Shell } from './shell.ts';
import { toolsOf } from './tools.ts';

/** `check`. */
export async function runCheck(args: Arguments, shell: Shell): Promise<Result> {
  const nameOf = nameFrom(shell.folder);
  const memoryBytes = args.memoryBytes ?? defaultMemoryBytes();
  const report = await checkProject(
    {
      query: queryOf(args, shell),
      look: args.flags.has('without-outputs') ? 'without outputs' : 'with outputs',
      cacheFolder: cacheFolder(shell.env, process.platform),
      memoryBytes,
      nameOf,
    },
    { ...toolsOf(args, shell, memoryBytes), ports: nodePorts },
  );
  const bad = new Set(report.problems.filter((each) => each.severity === 'error').map((each) => each.path));
  const isBad = (texture: CheckedTexture) =>
    texture.moved.length > 0 || bad.has(texture.source) || bad.has(texture.manifest);
  const failed = report.textures.filter(isBad).length;
  const summary = { built: 0, unchanged: report.textures.length - failed, failed };
  const orphans = report.orphans.map(({ manifest, source, reason, movedTo }) => ({
    manifest: nameOf(manifest),
    source: nameOf(source),
    reason,
    ...(movedTo === undefined ? {} : { movedTo: nameOf(movedTo) }),
  }));
  const textures = report.textures.map(({ source, manifest, moved, outputs }) => ({
    source: nameOf(source),
    manifest: nameOf(manifest),
    moved,
    outputs: outputs.map(({ path, state }) => ({ path: nameOf(path), state })),
  }));
  return {
    textures,
    more: { orphans },
    problems: report.problems,
    summary,
    lines: [`${summary.unchanged} as built, ${failed} not, ${orphans.length} orphaned.`],
    cancelled: report.cancelled,
  };
}
