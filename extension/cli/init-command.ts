import { type Problem, Refusal } from '../../core/problem.ts';
import { settingsTemplate } from '../../core/treatment/edit/template.ts';
import { SETTINGS_NAME } from '../../core/treatment/find/root.ts';
import { joinPath, resolvePath } from '../../core/treatment/paths/path.ts';
import { orRefuse } from '../node/files/laydown.ts';
import { nodeDisk, slashed } from '../node/files/node-disk.ts';
import { temporaryFor } from '../node/files/temporary.ts';
import type { Arguments } from './arguments.ts';
import { nameFrom } from './print.ts';
import { nothingDone, onlyProblems, type Result, type Shell } from './shell.ts';

/** How git should treat manifests: equal line ends on every system, and no diff of theirs unasked. */
const ATTRIBUTES_LINE = '*.mips.json text eol=lf linguist-generated';

/** `init`. Never replaces a settings file. */
export async function runInit(args: Arguments, shell: Shell): Promise<Result> {
  const nameOf = nameFrom(shell.folder);
  const folder = resolvePath(shell.folder, slashed(args.paths[0] ?? '.'));
  const settings = joinPath(folder, SETTINGS_NAME);
  const attributes = joinPath(folder, '.gitattributes');
  const lines: string[] = [];
  const problems: Problem[] = [];
  try {
    if ((await nodeDisk.kind(settings)) === null) {
      const text = new TextEncoder().encode(settingsTemplate);
      await orRefuse(settings, text.length, async () => {
        await nodeDisk.makeFolder(folder);
        await nodeDisk.write(settings, text);
        await nodeDisk.flush([settings]);
      });
      lines.push(`wrote ${nameOf(settings)}`);
    } else {
      problems.push({ code: 'settings-exist', severity: 'error', values: {}, path: settings });
    }
    const present = new TextDecoder().decode((await nodeDisk.read(attributes)) ?? new Uint8Array());
    if (present.split(/\r?\n/).includes(ATTRIBUTES_LINE)) {
      lines.push(`${nameOf(attributes)} has the line for manifests`);
    } else if (args.flags.has('gitattributes')) {
      await addLine(attributes, present);
      lines.push(`added to ${nameOf(attributes)}: ${ATTRIBUTES_LINE}`);
    } else {
      lines.push(`for .gitattributes, by hand or with --gitattributes: ${ATTRIBUTES_LINE}`);
    }
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    return onlyProblems([...problems, error.problem]);
  }
  return { textures: [], problems, summary: nothingDone, lines, cancelled: false };
}

async function addLine(path: string, present: string): Promise<void> {
  const gap = present === '' || present.endsWith('\n') ? '' : '\n';
  const text = new TextEncoder().encode(`${present}${gap}${ATTRIBUTES_LINE}\n`);
  const temporary = temporaryFor(path);
  await orRefuse(path, text.length, async () => {
    await nodeDisk.write(temporary, text);
    await nodeDisk.flush([temporary]);
    await nodeDisk.rename(temporary, path);
  });
}
