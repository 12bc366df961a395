import * as vscode from 'vscode';
import { reportRow } from '../../../core/review/report.ts';
import type { Platform } from '../platform.ts';
import { sayProblem } from '../words.ts';
import type { ReviewDesk } from './desk.ts';
import type { ReviewRow } from './row.ts';
import { sayHarm, sayVerdict } from './words.ts';

export const REVIEW_VIEW = 'sizeproof.review';

/** The list of changed textures beside source control, the most harmful first. */
export class ReviewTree implements vscode.TreeDataProvider<string>, vscode.FileDecorationProvider, vscode.Disposable {
  readonly #desk: ReviewDesk;
  readonly #after: Platform['after'];
  readonly #view: vscode.TreeView<string>;
  readonly #tree = new vscode.EventEmitter<void>();
  readonly #decorations = new vscode.EventEmitter<undefined>();
  readonly #owned: vscode.Disposable;
  /** Rows as the host has them. */
  #shown = '';

  readonly onDidChangeTreeData = this.#tree.event;
  readonly onDidChangeFileDecorations = this.#decorations.event;

  constructor(desk: ReviewDesk, after: Platform['after']) {
    this.#desk = desk;
    this.#after = after;
    this.#view = vscode.window.createTreeView(REVIEW_VIEW, { treeDataProvider: this, canSelectMany: true });
    this.#owned = vscode.Disposable.from(
      this.#view,
      vscode.window.registerFileDecorationProvider(this),
      desk.onDidChange(() => this.#update()),
    );
  }

  /** Paths of the rows that are selected. */
  get selected(): readonly string[] {
    return this.#view.selection;
  }

  /** The row that was clicked. While the host takes a new list it knows none for a moment; null where it stays so. */
  async clicked(): Promise<string | null> {
    for (let tries = 0; tries < TRIES; tries++) {
      const [path] = this.#view.selection;
      if (path !== undefined) return path;
      await new Promise<void>((resolve) => this.#after(TRY_MS, resolve));
    }
    return null;
  }

  /** Selects a row and leaves the focus where it is. */
  async reveal(path: string): Promise<void> {
    if (this.#view.visible) await this.#view.reveal(path, { select: true, focus: false });
  }

  getChildren(parent?: string): readonly string[] & string[] {
    return parent === undefined ? this.#desk.rows.map(({ item }) => item.path) : [];
  }

  getParent(): undefined {
    return undefined;
  }

  getTreeItem(path: string): vscode.TreeItem {
    const row = this.#desk.rowAt(path);
    const name = path.slice(path.lastIndexOf('/') + 1);
    const item = new vscode.TreeItem(name);
    item.id = path;
    if (row === null) return item;
    const looked = this.#desk.isLooked(row);
    item.resourceUri = uriOf(row, looked);
    item.iconPath = vscode.ThemeIcon.File;
    item.description = `${describe(row)}${folderOf(path)}`;
    item.tooltip = tooltipOf(row);
    item.contextValue = looked ? 'texture.looked' : 'texture';
    item.accessibilityInformation = {
      label: [name, describe(row), looked ? vscode.l10n.t('looked at') : ''].filter(Boolean).join(', '),
    };
    // Without arguments: the host forgets those of a list that is being replaced, and then refuses a click on it.
    item.command = { command: 'sizeproof.reviewOpen', title: vscode.l10n.t('Open Review') };
    return item;
  }

  provideFileDecoration(uri: vscode.Uri): vscode.FileDecoration | undefined {
    if (uri.scheme !== SCHEME) return undefined;
    if (uri.query === 'looked') {
      return {
        badge: '✓',
        tooltip: vscode.l10n.t('looked at'),
        color: new vscode.ThemeColor('disabledForeground'),
      };
    }
    if (uri.query !== 'harm') return undefined;
    return {
      badge: '!',
      tooltip: vscode.l10n.t('does harm'),
      color: new vscode.ThemeColor('list.warningForeground'),
    };
  }

  dispose(): void {
    this.#owned.dispose();
    this.#tree.dispose();
    this.#decorations.dispose();
  }

  #update(): void {
    const { rows, stage, subject } = this.#desk;
    void vscode.commands.executeCommand('setContext', 'sizeproof.reviewing', subject !== null);
    void vscode.commands.executeCommand('setContext', 'sizeproof.reviewStage', stage ?? '');
    const line = (row: ReviewRow) => `${uriOf(row, this.#desk.isLooked(row))} ${describe(row)} ${row.settled}`;
    const shown = rows.map(line).join('\n');
    if (shown !== this.#shown) {
      this.#shown = shown;
      this.#tree.fire();
      this.#decorations.fire(undefined);
    }
    this.#view.message = messageOf(this.#desk);
  }
}

const SCHEME = 'sizeproof-review';

/** A list of thousands is taken in a second. */
const [TRIES, TRY_MS] = [40, 50];

/** Decorations go by address: what a row is marked with stands in it. */
function uriOf({ item, impact }: ReviewRow, looked: boolean): vscode.Uri {
  const query = looked ? 'looked' : impact.harms.length > 0 ? 'harm' : '';
  return vscode.Uri.from({ scheme: SCHEME, path: `/${item.path}`, query });
}

/** What it does in one line: its harm before all else. */
function describe({ verdict, impact }: ReviewRow): string {
  if (verdict === null) return vscode.l10n.t('reading …');
  const harms = impact.harms.filter(({ name }) => name !== 'unreadable').map(sayHarm);
  return [...harms, sayVerdict(verdict)].join('; ');
}

function folderOf(path: string): string {
  const slash = path.lastIndexOf('/');
  return slash < 0 ? '' : `  ·  ${path.slice(0, slash)}`;
}

function tooltipOf({ item, verdict, impact, review, problems }: ReviewRow): vscode.MarkdownString {
  const text = new vscode.MarkdownString();
  const line = (words: string) => {
    text.appendText(words);
    text.appendMarkdown('\n\n');
  };
  line(
    item.oldPath === item.path
      ? item.path
      : vscode.l10n.t('{path} (was {old})', { path: item.path, old: item.oldPath }),
  );
  if (verdict === null) return text;
  line(sayVerdict(verdict));
  for (const harm of impact.harms) if (harm.name !== 'unreadable') line(`• ${sayHarm(harm)}`);
  const { path, oldPath, status, manifest } = item;
  const { seen, notes } = reportRow({ path, oldPath, status, verdict, impact, review, manifest, remarks: [] });
  if (seen !== '') line(vscode.l10n.t('Seen at {sizes}.', { sizes: seen }));
  for (const note of notes) line(`• ${note}`);
  for (const problem of problems) line(sayProblem(problem));
  line(vscode.l10n.t('Impact {score}', { score: impact.score.toFixed(1) }));
  return text;
}

/** What is compared, how much of it was looked at, and what is being done. */
function messageOf(desk: ReviewDesk): string {
  const { session, rows, stage, problem, lookedAt } = desk;
  if (problem !== null) return sayProblem(problem);
  if (session === null) return stage === 'listing' ? vscode.l10n.t('Listing changes …') : '';
  const { before, after } = session;
  const words = [vscode.l10n.t('{before} to {after}.', { before, after })];
  if (rows.length === 0) words.push(vscode.l10n.t('No texture changed.'));
  else words.push(vscode.l10n.t('{looked} of {count} looked at.', { looked: lookedAt, count: rows.length }));
  if (stage === 'headers') words.push(vscode.l10n.t('Reading headers …'));
  if (stage === 'pixels') words.push(vscode.l10n.t('Comparing pixels …'));
  if (stage === null && rows.some(({ settled }) => !settled)) {
    words.push(vscode.l10n.t('Some were judged by their headers alone.'));
  }
  if (desk.outdated === 'yes') words.push(vscode.l10n.t('The repository changed since: refresh.'));
  for (const each of session.problems) words.push(sayProblem(each));
  return words.join(' ');
}
