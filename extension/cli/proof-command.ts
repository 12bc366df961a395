import { openImage } from '../../core/codec/open.ts';
import { stateAt } from '../../core/export/at.ts';
import { isLarge, keepMiddle, sourceBytes } from '../../core/export/keep.ts';
import { type ProofOrder, SOURCE_LIMIT, startPreferences } from '../../core/export/order.ts';
import { proofPage } from '../../core/export/proof-page.ts';
import { byteText } from '../../core/figures.ts';
import { Cancelled } from '../../core/port.ts';
import { type Problem, placed, Refusal, refuse } from '../../core/problem.ts';
import { baseName, resolvePath } from '../../core/treatment/paths/path.ts';
import { nodeDisk, slashed } from '../node/files/node-disk.ts';
import { writeWhole } from '../node/files/whole-file.ts';
import { readPageCode } from '../node/page-code.ts';
import { newHash } from '../node/ports/hash.ts';
import { inflate } from '../node/ports/inflate.ts';
import { readKernels } from '../node/ports/kernels.ts';
import { openProject, type ProjectRoot, type ProjectTexture } from '../node/project/project.ts';
import { drawSheet } from '../node/workers/sheet.ts';
import type { Arguments } from './arguments.ts';
import { nameFrom } from './print.ts';
import { queryOf } from './query.ts';
import { nothingDone, onlyProblems, type Result, type Shell } from './shell.ts';

/** `proof`. */
export async function runProof(args: Arguments, shell: Shell): Promise<Result> {
  const project = await openProject(nodeDisk, queryOf(args, shell));
  const pairs = project.roots.flatMap((root) => root.textures.map((texture) => ({ root, texture })));
  if (pairs.length === 0) return onlyProblems(project.problems);
  const [{ root, texture }] = pairs;
  const written: { form: 'sheet' | 'html'; path: string; bytes: number }[] = [];
  const problems: Problem[] = [...project.problems];
  const cancel = {
    get cancelled() {
      return shell.isCancelled();
    },
  };
  try {
    if (pairs.length > 1) refuse('one-texture', { count: pairs.length }, { path: args.paths[0] });
    const order = await orderOf(root, texture, args);
    for (const form of ['sheet', 'html'] as const) {
      const given = args.proof[form];
      if (given === null || cancel.cancelled) continue;
      const path = resolvePath(shell.folder, slashed(given));
      await refuseSource(path, texture);
      const bytes =
        form === 'sheet'
          ? await drawSheet(order, readKernels(new URL('./engine.wasm', import.meta.url)).kernels, cancel)
          : await pageOf(order, args.proof.keep);
      await writeWhole(nodeDisk, path, bytes);
      written.push({ form, path, bytes: bytes.length });
    }
  } catch (error) {
    if (error instanceof Refusal) problems.push(placed(error.problem, texture.selected.file));
    else if (!(error instanceof Cancelled)) throw error;
  }
  const nameOf = nameFrom(shell.folder);
  const pathOf = (form: 'sheet' | 'html'): string | null => {
    const found = written.find((each) => each.form === form);
    return found === undefined ? null : nameOf(found.path);
  };
  return {
    textures: [{ source: nameOf(texture.selected.file), sheet: pathOf('sheet'), html: pathOf('html') }],
    problems,
    summary: nothingDone,
    lines: written.map(({ path, bytes }) => `wrote ${nameOf(path)} (${byteText(bytes)})`),
    cancelled: cancel.cancelled,
  };
}

async function orderOf({ selection }: ProjectRoot, texture: ProjectTexture, { proof }: Arguments): Promise<ProofOrder> {
  const { selected } = texture;
  const matching = selection.settings?.rules.filter(({ match, hits }) => match !== null && hits(selected.path)) ?? [];
  const roughness = texture.sources.find(({ use }) => use === 'roughness');
  const order: ProofOrder = {
    name: baseName(selected.file),
    path: selected.path,
    image: await readSource(selected.file),
    roughness: roughness === undefined ? null : await readSource(roughness.path),
    settings: {
      file: selection.file === null ? null : baseName(selection.file),
      globs: matching[matching.length - 1]?.match ?? null,
      treatment: selected.treatment,
      origins: selected.origins,
    },
    state: stateAt(proof, selected.treatment),
    preferences: startPreferences,
    remark: null,
  };
  // What cannot be opened is refused here, and not by a page that somebody was sent.
  openImage(order.image, order.name, inflate);
  return order;
}

async function readSource(path: string): Promise<Uint8Array> {
  const bytes = await nodeDisk.read(path);
  return bytes ?? refuse('source-unreadable', { reason: 'it is not there or may not be read' }, { path });
}

async function pageOf(order: ProofOrder, keep: 'all' | 'middle' | null): Promise<Uint8Array> {
  if (isLarge(order) && keep === null) {
    refuse('export-too-large', { bytes: sourceBytes(order), limit: SOURCE_LIMIT });
  }
  const kept = isLarge(order) && keep === 'middle' ? await keepMiddle(order, inflate) : order;
  const code = readPageCode(new URL('./page/', import.meta.url));
  return new TextEncoder().encode(proofPage(kept, { code, language: 'en', words: {} }, newHash));
}

/** A proof never takes the place of what it is of. */
async function refuseSource(path: string, { sources }: ProjectTexture): Promise<void> {
  const real = await nodeDisk.realPath(path);
  for (const source of sources) {
    if ((await nodeDisk.realPath(source.path)) === real) refuse('output-is-source', { source: real }, { path });
  }
}
