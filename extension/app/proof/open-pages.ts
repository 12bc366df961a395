import * as vscode from 'vscode';
import type { ProofChannel } from './document.ts';

interface OpenPage {
  readonly uri: vscode.Uri;
  readonly panel: vscode.WebviewPanel;
  readonly channel: ProofChannel;
}

/** The pages of proofs that are open, to find the one that a command means. */
export class OpenPages {
  readonly #pages = new Set<OpenPage>();

  add(page: OpenPage): vscode.Disposable {
    this.#pages.add(page);
    return new vscode.Disposable(() => this.#pages.delete(page));
  }

  /** The page of a texture that is seen, the one in front first; null where none is. */
  seen(uri: vscode.Uri): ProofChannel | null {
    const own = [...this.#pages].filter((page) => page.uri.toString() === uri.toString() && page.panel.visible);
    return (own.find(({ panel }) => panel.active) ?? own[0])?.channel ?? null;
  }
}
