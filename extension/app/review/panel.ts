import * as vscode from 'vscode';
import { refuse } from '../../../core/problem.ts';
import { PROTOCOL, type ReviewEvent } from '../../../core/protocol.ts';
import type { ReviewCalls } from '../../../core/review/want.ts';
import { joinPath } from '../../../core/treatment/paths/path.ts';
import type { Platform } from '../platform.ts';
import { type Answers, Channel } from '../proof/channel.ts';
import { VIEW_TYPE } from '../proof/editor.ts';
import { pageHtml } from '../proof/html.ts';
import { readConfiguration } from '../settings/configuration.ts';
import { translations } from '../words.ts';
import type { ReviewDesk } from './desk.ts';
import { readReviewRequest } from './question.ts';
import type { ReviewRow } from './row.ts';

export const REVIEW_PANEL = 'sizeproof.review';

/** The panel that shows one texture of the review before and after. There is one; it goes from texture to texture. */
export class ReviewPanel implements vscode.Disposable {
  readonly #desk: ReviewDesk;
  readonly #tools: PanelTools;
  readonly #went = new vscode.EventEmitter<string>();
  readonly #following: vscode.Disposable;
  #panel: vscode.WebviewPanel | null = null;
  #channel: Channel<ReviewCalls, ReviewEvent> | null = null;
  #path: string;
  #revision = 0;

  /** Fires with the path of the texture that is at hand. */
  readonly onDidGo = this.#went.event;

  constructor(desk: ReviewDesk, tools: PanelTools) {
    this.#desk = desk;
    this.#tools = tools;
    this.#path = '';
    this.#following = desk.onDidChange(() => this.#tell());
  }

  /** Path of the texture at hand; empty where there is none. */
  get path(): string {
    return this.#panel === null ? '' : this.#path;
  }

  /** Shows a texture. The focus stays where it is unless it is wanted. */
  show(path: string, focus: 'take' | 'leave'): void {
    this.#path = path;
    if (this.#panel === null) {
      const place = { viewColumn: vscode.ViewColumn.Active, preserveFocus: focus === 'leave' };
      this.adopt(vscode.window.createWebviewPanel(REVIEW_PANEL, vscode.l10n.t('Review'), place));
    } else if (!this.#panel.visible || focus === 'take') {
      this.#panel.reveal(undefined, focus === 'leave');
    }
    this.#title();
    this.#went.fire(path);
    this.#tell();
  }

  /** Makes a panel this one's own: a new one, or one that the host kept over a reload. */
  adopt(panel: vscode.WebviewPanel, path = this.#path): void {
    this.#panel?.dispose();
    this.#path = path;
    this.#panel = panel;
    const { platform, pages, report } = this.#tools;
    panel.webview.options = { enableScripts: true, localResourceRoots: [pages] };
    const channel = new Channel<ReviewCalls, ReviewEvent>(panel.webview, {
      answers: this.#answers(),
      read: readReviewRequest,
      revision: () => this.#revision,
      report,
    });
    this.#channel = channel;
    panel.onDidDispose(() => {
      channel.dispose();
      if (this.#panel !== panel) return;
      this.#panel = null;
      this.#channel = null;
    });
    panel.webview.html = pageHtml(panel.webview, pages, platform.newNonce(), 'review');
    this.#title();
  }

  dispose(): void {
    this.#following.dispose();
    this.#panel?.dispose();
    this.#went.dispose();
  }

  #tell(): void {
    this.#revision++;
    this.#channel?.tell({ protocol: PROTOCOL, kind: 'texture', revision: this.#revision });
  }

  #title(): void {
    if (this.#panel === null) return;
    const name = this.#path.slice(this.#path.lastIndexOf('/') + 1);
    this.#panel.title = name === '' ? vscode.l10n.t('Review') : vscode.l10n.t('Review: {name}', { name });
  }

  /** The row at hand, or the first one where it is no longer there. */
  #row(): ReviewRow {
    const row = this.#desk.rowAt(this.#path) ?? this.#desk.rows[0];
    if (row === undefined) return refuse('review-nothing', {});
    if (row.item.path !== this.#path) {
      this.#path = row.item.path;
      this.#title();
    }
    return row;
  }

  #answers(): Answers<ReviewCalls> {
    const desk = this.#desk;
    return {
      open: async () => {
        const row = this.#row();
        const { session, rows } = desk;
        const { preferences } = readConfiguration(undefined);
        const { path, oldPath, status, manifest } = row.item;
        return {
          // A page that is told of a review in words of its own must not take one for another.
          key: `${session?.after ?? ''} ${path} ${row.content ?? row.index}`,
          path,
          oldPath,
          status,
          manifest,
          beforeLabel: session?.before ?? '',
          afterLabel: session?.after ?? '',
          index: rows.indexOf(row),
          count: rows.length,
          lookedAt: desk.lookedAt,
          looked: desk.isLooked(row) ? 'yes' : 'no',
          abilities: { look: true, proof: row.item.status === 'removed' ? null : true },
          rows: null,
          problems: row.problems,
          preferences: { backdrop: preferences.backdrop, swapDwell: preferences.swapDwell },
          words: translations(),
          remark: null,
        };
      },
      sides: async () => {
        const row = this.#row();
        void desk.compare([row]);
        const sides = await desk.session?.sides(row.index);
        return sides ?? refuse('review-nothing', {});
      },
      go: async ({ index }) => {
        const row = desk.rows[index];
        if (row !== undefined) this.show(row.item.path, 'take');
        return {};
      },
      look: async ({ looked }) => {
        desk.look([this.#row()], looked);
        return {};
      },
      proof: async () => {
        const { session } = desk;
        const path = joinPath(session?.folder ?? '', this.#row().item.path);
        await vscode.commands.executeCommand('vscode.openWith', vscode.Uri.file(path), VIEW_TYPE);
        return {};
      },
      copy: async ({ text }) => {
        await vscode.env.clipboard.writeText(text);
        return {};
      },
    };
  }
}

export interface PanelTools {
  readonly platform: Platform;
  /** The folder of the built page. */
  readonly pages: vscode.Uri;
  /** Hears of what should not happen. */
  readonly report: (error: unknown) => void;
}
