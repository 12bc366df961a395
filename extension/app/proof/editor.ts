import * as vscode from 'vscode';
import type { BuildDesk } from '../build/desk.ts';
import type { Platform } from '../platform.ts';
import { answersFor } from './answers.ts';
import { Channel } from './channel.ts';
import { TextureCounts } from './counts.ts';
import { type ProofChannel, ProofDocument } from './document.ts';
import { TextureFacts } from './facts.ts';
import { pageHtml } from './html.ts';
import type { OpenPages } from './open-pages.ts';
import { readRequest } from './question.ts';

export const VIEW_TYPE = 'sizeproof.proof';

export interface EditorTools {
  readonly platform: Platform;
  readonly desk: BuildDesk;
  readonly log: vscode.LogOutputChannel;
  readonly open: OpenPages;
}

/** The folder of the built page. */
export function pagesFolder(extensionUri: vscode.Uri): vscode.Uri {
  return vscode.Uri.joinPath(extensionUri, 'dist', 'page');
}

/** The read-only editor that shows a texture at its sizes. A document is the texture, each view a page that may come and go. */
export function registerProofEditor(
  extensionUri: vscode.Uri,
  { platform, desk, log, open }: EditorTools,
): vscode.Disposable {
  const counts = new TextureCounts();
  const pages = pagesFolder(extensionUri);
  const report = (error: unknown) => log.error(error instanceof Error ? error : String(error));
  const provider: vscode.CustomReadonlyEditorProvider<ProofDocument> = {
    openCustomDocument(uri) {
      return new ProofDocument(new TextureFacts(uri, platform, counts), { platform, desk, counts, report });
    },
    resolveCustomEditor(document, panel) {
      const { webview } = panel;
      webview.options = { enableScripts: true, localResourceRoots: [pages] };
      const answers = answersFor(document, { platform, desk, pages });
      const options = { answers, read: readRequest, revision: () => document.revision, report };
      const channel: ProofChannel = new Channel(webview, options);
      const added = document.addPage(channel);
      const opened = open.add({ uri: document.uri, panel, channel });
      panel.onDidDispose(() => vscode.Disposable.from(added, opened).dispose());
      webview.html = pageHtml(webview, pages, platform.newNonce());
    },
  };
  return vscode.window.registerCustomEditorProvider(VIEW_TYPE, provider, {
    supportsMultipleEditorsPerDocument: true,
  });
}
