import * as vscode from 'vscode';
import type { HostCalls, HostEvent } from '../../../core/protocol.ts';
import type { Channel } from './channel.ts';
import type { TextureFacts } from './facts.ts';
import { FirstPrinter } from './first-print.ts';
import { type WatchTools, watchTexture } from './watch.ts';

export type ProofChannel = Channel<HostCalls, HostEvent>;

/** One texture that is proofed, however many pages show it. It is watched as long as one does. */
export class ProofDocument implements vscode.CustomDocument {
  readonly facts: TextureFacts;
  readonly first: FirstPrinter;
  readonly #pages = new Set<ProofChannel>();
  readonly #watching: vscode.Disposable;
  #revision = 0;

  constructor(facts: TextureFacts, tools: WatchTools) {
    this.facts = facts;
    this.first = new FirstPrinter(facts, tools.platform, tools.report);
    this.first.begin();
    this.#watching = watchTexture(facts, tools, {
      nextRevision: () => ++this.#revision,
      tell: (event) => {
        if (event.kind === 'source') this.first.forget();
        for (const page of this.#pages) page.tell(event);
      },
    });
  }

  get uri(): vscode.Uri {
    return this.facts.uri;
  }

  /** Rises with each change of source, settings or outputs. */
  get revision(): number {
    return this.#revision;
  }

  /** Tells a page what changes, until it is closed. */
  addPage(page: ProofChannel): vscode.Disposable {
    this.#pages.add(page);
    return new vscode.Disposable(() => {
      this.#pages.delete(page);
      page.dispose();
    });
  }

  dispose(): void {
    this.#watching.dispose();
    this.first.forget();
  }
}
