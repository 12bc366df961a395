import * as vscode from 'vscode';
import type { Platform, ReviewSubject } from '../platform.ts';
import { doorOf, type ReviewParts } from './commands.ts';
import { type Only, ReviewDesk } from './desk.ts';
import { GitGate } from './gate.ts';
import { LookedAt } from './looked.ts';
import { REVIEW_PANEL, ReviewPanel } from './panel.ts';
import { ReviewTree } from './tree.ts';

/** The parts of reviews: what is at hand, its list, its panel, and who tells when the repository moves. */
export function openReviews(
  context: vscode.ExtensionContext,
  platform: Platform,
  log: vscode.LogOutputChannel,
): ReviewParts & vscode.Disposable {
  const report = (error: unknown) => log.error(error instanceof Error ? error : String(error));
  const desk = new ReviewDesk(platform, new LookedAt(context.workspaceState), log);
  const tree = new ReviewTree(desk, platform.after);
  const pages = vscode.Uri.joinPath(context.extensionUri, 'dist', 'page');
  const panel = new ReviewPanel(desk, { platform, pages, report });
  const gate = new GitGate(() => desk.outdate(), report);
  const kept = context.workspaceState;
  const remember = (subject: ReviewSubject, only: Only) => {
    void kept.update(SUBJECT, { subject, only: only === null ? null : [...only] });
  };
  const owned = vscode.Disposable.from(
    desk,
    tree,
    panel,
    gate,
    panel.onDidGo((path) => {
      void kept.update(PATH, path);
      void tree.reveal(path);
    }),
    vscode.window.registerWebviewPanelSerializer(REVIEW_PANEL, {
      async deserializeWebviewPanel(restored) {
        const last = kept.get<{ readonly subject: ReviewSubject; readonly only: readonly string[] | null }>(SUBJECT);
        if (last !== undefined) {
          doorOf(platform);
          await desk.begin(last.subject, last.only === null ? null : new Set(last.only));
        }
        panel.adopt(restored, kept.get<string>(PATH) ?? '');
      },
    }),
  );
  return { platform, desk, tree, panel, gate, remember, dispose: () => owned.dispose() };
}

const SUBJECT = 'review.subject';
const PATH = 'review.path';
