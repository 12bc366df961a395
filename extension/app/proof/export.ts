import * as vscode from 'vscode';
import { openImage } from '../../../core/codec/open.ts';
import { isLarge, keepMiddle, sourceBytes } from '../../../core/export/keep.ts';
import type { ProofOrder } from '../../../core/export/order.ts';
import { proofPage } from '../../../core/export/proof-page.ts';
import { Cancelled } from '../../../core/port.ts';
import { Refusal, refuse } from '../../../core/problem.ts';
import type { ExportOrder } from '../../../core/protocol.ts';
import { baseName } from '../../../core/treatment/paths/path.ts';
import type { Platform } from '../platform.ts';
import { readConfiguration } from '../settings/configuration.ts';
import { isThere } from '../settings/create.ts';
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
  { form, state }: { readonly form: ExportOrder['form']; readonly state: unknown },
  tools: ExportTools,
): Promise<vscode.Uri | null> {
  const order = await orderOf(texture, state, tools.platform);
  const kept = form === 'page' ? await keptOf(order, tools.platform) : order;
  if (kept === null) return null;
  const stem = texture.name.replace(/\.[^.]*$/, '');
  const target = await vscode.window.showSaveDialog({
    defaultUri: vscode.Uri.joinPath(
      await folderFor(form, texture),
      `${stem}.proof.${form === 'sheet' ? 'png' : 'html'}`,
    ),
    filters: form === 'sheet' ? { PNG: ['png'] } : { HTML: ['html'] },
  });
  if (target === undefined) return null;
  if (target.toString() === texture.uri.toString()) refuse('output-is-source', { source: texture.name });
  const title = vscode.l10n.t('Exporting the proof of {name}', { name: texture.name });
  const location = vscode.ProgressLocation.Notification;
  return vscode.window.withProgress({ location, title, cancellable: true }, async (_, token) => {
    try {
      const bytes = form === 'sheet' ? await tools.platform.drawSheet(kept, token) : await makePage(kept, tools);
      if (token.isCancellationRequested) return null;
      await writeWhole(target, bytes, tools.platform);
      return target;
    } catch (error) {
      if (error instanceof Cancelled) return null;
      throw error;
    }
  });
}

/** Where a file is offered to go. A picture among the textures would be built as one of them: it goes to the outputs, or where there
 *  are none yet, above the workspace. */
async function folderFor(form: ExportOrder['form'], texture: TextureFacts): Promise<vscode.Uri> {
  const beside = vscode.Uri.joinPath(texture.uri, '..');
  if (form === 'page') return beside;
  const { root, place } = await texture.settings();
  const outputs = place.uriOf(root.outFolder);
  if (await isThere(outputs)) return outputs;
  const folder = vscode.workspace.getWorkspaceFolder(texture.uri);
  return folder === undefined ? beside : vscode.Uri.joinPath(folder.uri, '..');
}

/** The proof as the settings are typed now. */
async function orderOf(texture: TextureFacts, state: unknown, { ports }: Platform): Promise<ProofOrder> {
  const settings = await texture.settings();
  if (settings.texture === null) throw new Refusal(settings.problems[0]);
  const { treatment, origins } = settings.texture;
  const roughness = await texture.roughness();
  const image = new Uint8Array(await texture.bytes());
  // What cannot be opened is refused here, and not by a page that somebody was sent.
  openImage(image, texture.name, ports.inflate);
  return {
    name: texture.name,
    path: settings.path,
    image,
    roughness: roughness === null ? null : new Uint8Array(roughness),
    settings: {
      file: settings.root.file === null ? null : baseName(settings.root.file),
      globs: matchingRule(settings)?.rule.match ?? null,
      treatment,
      origins,
    },
    state,
    preferences: readConfiguration(texture.uri).preferences,
    remark: null,
  };
}

/** What is to be carried of the source: a large one is asked about. Null where the user thought better of it. */
async function keptOf(order: ProofOrder, { ports }: Platform): Promise<ProofOrder | null> {
  if (!isLarge(order)) return order;
  const all = vscode.l10n.t('Carry All of It');
  const middle = vscode.l10n.t('Carry Its Middle');
  const size = Math.ceil(sourceBytes(order) / 1e6);
  const chosen = await vscode.window.showWarningMessage(
    vscode.l10n.t('The page would carry {size} MB of {name}.', { size, name: order.name }),
    {
      modal: true,
      detail: vscode.l10n.t(
        'A page computes its prints from the source, which goes with it. The middle is 2048 texels a side, and the page says so.',
      ),
    },
    all,
    middle,
  );
  if (chosen === middle) return keepMiddle(order, ports.inflate);
  return chosen === all ? order : null;
}

async function makePage(order: ProofOrder, { platform, pages }: ExportTools): Promise<Uint8Array> {
  const words = translations();
  // A page without translations is in English, whatever the editor speaks.
  const language = Object.keys(words).length === 0 ? 'en' : vscode.env.language;
  const code = await readPageCode(pages);
  return platform.encodeUtf8(proofPage(order, { code, language, words }, platform.ports.newHash));
}
