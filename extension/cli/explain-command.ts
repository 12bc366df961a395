import { explainTexture } from '../../core/treatment/explain.ts';
import { nodeDisk } from '../node/files/node-disk.ts';
import { openProject, type ProjectRoot, type ProjectTexture } from '../node/project/project.ts';
import type { Arguments } from './arguments.ts';
import { nameFrom } from './print.ts';
import { queryOf } from './query.ts';
import { nothingDone, type Result, type Shell } from './shell.ts';

/** `explain`. The document names paths in full, so that it is the same from wherever it is asked for. */
export async function runExplain(args: Arguments, shell: Shell): Promise<Result> {
  const project = await openProject(nodeDisk, queryOf(args, shell));
  const nameOf = nameFrom(shell.folder);
  const pairs = project.roots.flatMap((root) => root.textures.map((texture) => ({ root, texture })));
  return {
    textures: pairs.map(({ root, texture }) => documentOf(root, texture)),
    problems: project.problems,
    summary: nothingDone,
    lines: pairs.flatMap(({ root, texture }) => linesOf(root, texture, nameOf)),
    cancelled: shell.isCancelled(),
  };
}

function documentOf({ selection }: ProjectRoot, { selected, manifestPath }: ProjectTexture): object {
  return {
    source: selected.path,
    root: selection.folder,
    settings: selection.file,
    hidden: selection.hidden,
    manifest: manifestPath,
    treatment: selected.treatment,
    origins: explainTexture(selected),
  };
}

function linesOf({ selection }: ProjectRoot, texture: ProjectTexture, nameOf: (path: string) => string): string[] {
  const { file, hidden } = selection;
  const rows = explainTexture(texture.selected);
  const width = Math.max(...rows.map((row) => row.key.length));
  return [
    nameOf(texture.selected.file),
    `  settings: ${file === null ? 'none, the built-in defaults apply' : nameOf(file)}`,
    ...(hidden === null ? [] : [`  without effect here: ${nameOf(hidden)}`]),
    ...rows.map(({ key, value, rule, place }) => {
      const where = place === null ? rule : `${rule}, ${nameOf(place.path ?? '')}:${place.line}:${place.column}`;
      return `  ${key.padEnd(width)}  ${JSON.stringify(value)}  (${where})`;
    }),
  ];
}
