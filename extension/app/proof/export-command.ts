import * as vscode from 'vscode';
import { type ExportOrder, PROTOCOL } from '../../../core/protocol.ts';
import { type ExportTools, exportProof } from './export.ts';
import type { TextureFacts } from './facts.ts';
import type { OpenPages } from './open-pages.ts';

/** Asks what to make of a texture's proof, and makes it: as the page that is open shows it, else as a page at its start would. */
export async function exportByCommand(texture: TextureFacts, open: OpenPages, tools: ExportTools): Promise<void> {
  const forms: readonly (vscode.QuickPickItem & { readonly form: ExportOrder['form'] })[] = [
    {
      form: 'sheet',
      label: vscode.l10n.t('Sheet'),
      description: vscode.l10n.t('one picture: every target at its true size, and the kernels compared'),
    },
    {
      form: 'page',
      label: vscode.l10n.t('Page'),
      description: vscode.l10n.t('one HTML file that shows the proof without an editor and without a network'),
    },
  ];
  const title = vscode.l10n.t('Export the proof of {name}', { name: texture.name });
  const chosen = await vscode.window.showQuickPick(forms, { title });
  if (chosen === undefined) return;
  const page = open.seen(texture.uri);
  if (page !== null) {
    // It knows what it shows, and says itself what became of it.
    page.tell({ protocol: PROTOCOL, kind: 'export', form: chosen.form });
    return;
  }
  const written = await exportProof(texture, { form: chosen.form, state: null }, tools);
  if (written === null) return;
  vscode.window.setStatusBarMessage(
    vscode.l10n.t('Wrote {path}.', { path: vscode.workspace.asRelativePath(written) }),
    SHOWN_MS,
  );
}

/** How long a message stays in the status bar. */
const SHOWN_MS = 4000;
