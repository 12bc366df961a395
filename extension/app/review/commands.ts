import * as vscode from 'vscode';
import { imageExtension } from '../../../core/codec/open.ts';
import { refuse } from '../../../core/problem.ts';
import { pathBelow } from '../../../core/treatment/paths/path.ts';
import type { Platform, ReviewDoor, ReviewSubject } from '../platform.ts';
import { activeResource } from '../selected.ts';
import { readAsked } from './asked.ts';
import type { Only, ReviewDesk } from './desk.ts';
import type { GitGate } from './gate.ts';
import type { ReviewPanel } from './panel.ts';
import { pickCommit, pickSubject } from './pick.ts';
import type { ReviewRow } from './row.ts';
import { REVIEW_VIEW, type ReviewTree } from './tree.ts';

export interface ReviewParts {
  readonly platform: Platform;
  readonly desk: ReviewDesk;
  readonly tree: ReviewTree;
  readonly panel: ReviewPanel;
  readonly gate: GitGate;
  /** Keeps what is reviewed, for a panel that the host restores. */
  readonly remember: (subject: ReviewSubject, only: Only) => void;
}

/** Commands of reviews, by their names without the extension's. */
export function reviewCommands(
  parts: ReviewParts,
): Readonly<Record<string, (...given: readonly unknown[]) => unknown>> {
  const { desk, panel, tree } = parts;
  const selected = (given: unknown): readonly ReviewRow[] => {
    const clicked = typeof given === 'string' ? [given] : [];
    const chosen = clicked.length > 0 && !tree.selected.includes(clicked[0]) ? clicked : tree.selected;
    const paths = chosen.length > 0 ? chosen : [panel.path];
    return paths.flatMap((path) => desk.rowAt(path) ?? []);
  };
  return {
    review: (...given) => review(parts, given),
    reviewTwo: async (first, all) => {
      const { files } = readAsked([first, all]);
      if (files.length !== 2) refuse('review-two', { count: files.length });
      const [before, after] = files.map((each) => pathOfTexture(each));
      await begin(parts, { kind: 'files', before, after }, null);
    },
    reviewFileCommit: async (first, second) => {
      // The host hands the timeline's own item to none but its own extensions; the file stands beside it.
      const file = [first, second].find((each) => each instanceof vscode.Uri) ?? activeResource();
      if (!(file instanceof vscode.Uri)) return;
      const path = pathOfTexture(file);
      const door = doorOf(parts.platform);
      const folder = await door.repositoryOf(folderOf(path));
      const subject = await pickCommit(door, folder, path);
      if (subject === null) return;
      await begin(parts, subject, null, path);
    },
    reviewOpen: async () => {
      const path = await tree.clicked();
      if (path !== null) panel.show(path, 'leave');
    },
    reviewNext: () => step(parts, 1),
    reviewPrevious: () => step(parts, -1),
    reviewToggleLooked: (...given) => {
      // A row that the host has just replaced comes as nothing, and no other is meant.
      if (given.length > 0 && typeof given[0] !== 'string') return;
      const rows = selected(given[0]);
      desk.look(rows, rows.every((row) => desk.isLooked(row)) ? 'no' : 'yes');
    },
    reviewRefresh: () => desk.refresh(),
    reviewStop: () => desk.stop(),
    reviewComparePixels: () => {
      const { stage } = desk;
      const location = { viewId: REVIEW_VIEW };
      if (stage !== null) return undefined;
      return vscode.window.withProgress({ location, title: vscode.l10n.t('Comparing pixels') }, () =>
        desk.compare(desk.rows),
      );
    },
  };
}

async function review(parts: ReviewParts, given: readonly unknown[]): Promise<void> {
  const door = doorOf(parts.platform);
  const { files, root, staged } = readAsked(given);
  if (files.length === 0) {
    const folder = root === null ? await chooseFolder(parts) : pathOf(root);
    if (folder === null) return;
    const subject = await pickSubject(door, await door.repositoryOf(folder));
    if (subject !== null) await begin(parts, subject, null);
    return;
  }
  const textures = files.filter(({ path }) => imageExtension(path) !== null);
  if (textures.length === 0) refuse('review-no-image', { name: nameOf(files[0]) });
  const folder = await door.repositoryOf(folderOf(pathOf(textures[0])));
  const paths = textures.flatMap((each) => pathBelow(folder, pathOf(each)) ?? []);
  const range = { kind: staged === 'yes' ? ('index' as const) : ('working' as const) };
  await begin(parts, { kind: 'range', folder, range }, new Set(paths));
}

/** Begins a review, shows its list, and the first texture where it was asked for by its file. */
async function begin(
  parts: ReviewParts,
  subject: ReviewSubject,
  only: Only,
  first: string | null = null,
): Promise<void> {
  const { desk, panel, remember } = parts;
  doorOf(parts.platform);
  remember(subject, only);
  await vscode.commands.executeCommand(`${REVIEW_VIEW}.focus`);
  const location = { viewId: REVIEW_VIEW };
  await vscode.window.withProgress({ location }, () => desk.begin(subject, only));
  const below = first === null ? null : pathBelow(desk.session?.folder ?? '', first);
  const row = (below === null ? null : desk.rowAt(below)) ?? desk.rows[0];
  if (row === undefined || (only === null && below === null && subject.kind !== 'files')) return;
  panel.show(row.item.path, 'leave');
}

/** The texture after or before the one at hand, round to the first. */
function step({ desk, panel, tree }: ReviewParts, by: 1 | -1): void {
  const { rows } = desk;
  if (rows.length === 0) refuse('review-nothing', {});
  const at = rows.findIndex(({ item }) => item.path === (panel.path || tree.selected[0]));
  const next = at < 0 ? (by === 1 ? 0 : rows.length - 1) : (at + by + rows.length) % rows.length;
  panel.show(rows[next].item.path, 'leave');
}

/** Git runs where the workspace is trusted and lies on a disk; elsewhere it is said why not. */
export function doorOf({ review }: Platform): ReviewDoor {
  if (review === null) return refuse('review-no-git', {});
  if (!vscode.workspace.isTrusted) return refuse('review-untrusted', {});
  return review;
}

/** The folder of the repository that is meant; asks where there are several. */
async function chooseFolder({ gate }: ReviewParts): Promise<string | null> {
  const open = gate.folders.length > 0 ? gate.folders : (vscode.workspace.workspaceFolders ?? []).map(({ uri }) => uri);
  const folders = open.filter(({ scheme }) => scheme === 'file');
  if (folders.length === 0) return refuse('review-no-git', {});
  if (folders.length === 1) return pathOf(folders[0]);
  const items = folders.map((uri) => ({ label: nameOf(uri), description: uri.fsPath, uri }));
  const chosen = await vscode.window.showQuickPick(items, { placeHolder: vscode.l10n.t('In which repository?') });
  return chosen === undefined ? null : pathOf(chosen.uri);
}

function pathOfTexture(file: vscode.Uri): string {
  if (file.scheme !== 'file') refuse('review-no-git', {});
  if (imageExtension(file.path) === null) refuse('review-no-image', { name: nameOf(file) });
  return pathOf(file);
}

function pathOf(uri: vscode.Uri): string {
  return uri.fsPath.replaceAll('\\', '/');
}

function folderOf(path: string): string {
  return path.slice(0, Math.max(1, path.lastIndexOf('/')));
}

function nameOf(uri: vscode.Uri): string {
  return uri.path.slice(uri.path.lastIndexOf('/') + 1);
}
