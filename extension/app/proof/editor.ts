import * as vscode from 'vscode';
import type { BuildDesk } from '../build/desk.ts';
import type { Platform } from '../platform.ts';
import { answersFor } from './answers.ts';
import { Channel } from './channel.ts';
import { TextureCounts } from './counts.ts';
import { ProofDocument } from './document.ts';
import { pageHtml } from './html.ts';
import { watchTexture } from './watch.ts';

export const VIEW_TYPE = 'sizeproof.proof';

/** The read-only editor that shows a texture at its sizes. A document is the texture, each view a page that may come and go. */
export function registerProofEditor(
  extensionUri: vscode.Uri,
  platform: Platform,
  desk: BuildDesk,
  log: vscode.LogOutputChannel,
): vscode.Disposable {
  const counts = new TextureCounts();
  const pages = vscode.Uri.joinPath(extensionUri, 'dist', 'page');
  const provider: vscode.CustomReadonlyEditorProvider<ProofDocument> = {
    openCustomDocument: (uri) => new ProofDocument(uri, platform, counts),
    resolveCustomEditor(document, panel) {
      const { webview } = panel;
      webview.options = { enableScripts: true, localResourceRoots: [pages] };
      const channel = new Channel(webview, {
        answers: answersFor(document, { platform, desk }),
        revision: () => document.revision,
        report: (error) => log.error(error instanceof Error ? error : String(error)),
      });
      const watching = watchTexture(document, { platform, desk, counts }, (event) => channel.tell(event));
      panel.onDidDispose(() => {
        watching.dispose();
        channel.dispose();
      });
      webview.html = pageHtml(webview, pages, platform.newNonce());
    },
  };
  return vscode.window.registerCustomEditorProvider(VIEW_TYPE, provider, {
    supportsMultipleEditorsPerDocument: true,
  });
}

/** A texture outside any editor, for commands. */
export function looseDocument(uri: vscode.Uri, platform: Platform): ProofDocument {
  return new ProofDocument(uri, platform, new TextureCounts());
}
