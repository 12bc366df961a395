import * as vscode from 'vscode';
import { type ProofOrder, SOURCE_LIMIT } from '../../../core/export/order.ts';
import { proofPage } from '../../../core/export/proof-page.ts';
import { Refusal, refuse } from '../../../core/problem.ts';
import type { ExportOrder } from '../../../core/protocol.ts';
import type { Platform } from '../platform.ts';
import { readConfiguration } from '../settings/configuration.ts';
import { matchingRule } from '../settings/open.ts';
import { translations } from '../words.ts';
import type { TextureFacts } from './facts.ts';
import { readPageCode } from './page-code.ts';
import { writeWhole } from './write-whole.ts';

export interface ExportTools {
  readonly platform: Platform;
  /** The folder of the built page. */
  readonly pages: vscode.Uri;
}

/** Asks where to, makes a proof's file, and writes it there. `state` is what a page keeps, null where none is open. Answers null
 *  where the user thought better of it. Throws Refusal. */
export async function exportProof(
  texture: TextureFacts,
  { state }: { readonly form: ExportOrder['form']; readonly state: unknown },
  tools: ExportTools,
): Promise<vscode.Uri | null> {
  const order = await orderOf(texture, state);
  if (!(await isToBeKept(order))) return null;
  const stem = texture.name.replace(/\.[^.]*$/, '');
  const target = await vscode.window.showSaveDialog({
    defaultUri: vscode.Uri.joinPath(texture.uri, '..', `${stem}.proof.html`),
    filters: { HTML: ['html'] },
  });
  if (target === undefined) return null;
  if (target.toString() === texture.uri.toString()) refuse('output-is-source', { source: texture.name });
  const title = vscode.l10n.t('Exporting the proof of {name}', { name: texture.name });
  await vscode.window.withProgress({ location: vscode.ProgressLocation.Window, title }, async () => {
    await writeWhole(target, await makePage(order, tools), tools.platform);
  });
  return target;
}

/** The proof as the settings are typed now. */
async function orderOf(texture: TextureFacts, state: unknown): Promise<ProofOrder> {
  const settings = await texture.settings();
  if (settings.texture === null) throw new Refusal(settings.problems[0]);
  const { treatment, origins } = settings.texture;
  const { file } = settings.root;
  const roughness = await texture.roughness();
  return {
    name: texture.name,
    path: settings.path,
    image: new Uint8Array(await texture.bytes()),
    roughness: roughness === null ? null : new Uint8Array(roughness),
    settings: {
      file: file === null ? null : file.slice(file.lastIndexOf('/') + 1),
      globs: matchingRule(settings)?.rule.match ?? null,
      treatment,
      origins,
    },
    state,
    preferences: readConfiguration(texture.uri).preferences,
    remark: null,
  };
}

/** Whether all of the source is to be carried; a large one is asked about. */
async function isToBeKept({ image, roughness, name }: ProofOrder): Promise<boolean> {
  const bytes = image.length + (roughness?.length ?? 0);
  if (bytes <= SOURCE_LIMIT) return true;
  const all = vscode.l10n.t('Carry All of It');
  const chosen = await vscode.window.showWarningMessage(
    vscode.l10n.t('The page would carry {size} MB of {name}.', { size: Math.ceil(bytes / 1e6), name }),
    { modal: true, detail: vscode.l10n.t('It computes its prints from the source, which goes with it.') },
    all,
  );
  return chosen === all;
}

async function makePage(order: ProofOrder, { platform, pages }: ExportTools): Promise<Uint8Array> {
  const words = translations();
  // A page without translations is in English, whatever the editor speaks.
  const language = Object.keys(words).length === 0 ? 'en' : vscode.env.language;
  const code = await readPageCode(pages);
  const text = proofPage(order, { code, language, words, over: 'keep' }, platform.ports.newHash);
  return platform.encodeUtf8(text);
}
