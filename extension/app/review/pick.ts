import * as vscode from 'vscode';
import type { BranchLine, ReviewDoor, ReviewSubject } from '../platform.ts';

/** Asks what is to be reviewed in a repository. Null where nobody answered. Throws Refusal. */
export async function pickSubject(door: ReviewDoor, folder: string): Promise<ReviewSubject | null> {
  const kinds = [
    {
      label: vscode.l10n.t('Working tree'),
      description: vscode.l10n.t('what the files are now, against the last commit'),
      choose: async (): Promise<ReviewSubject | null> => ({ kind: 'range', folder, range: { kind: 'working' } }),
    },
    {
      label: vscode.l10n.t('Staged changes'),
      description: vscode.l10n.t('what would be committed, against the last commit'),
      choose: async (): Promise<ReviewSubject | null> => ({ kind: 'range', folder, range: { kind: 'index' } }),
    },
    {
      label: vscode.l10n.t('A commit …'),
      description: vscode.l10n.t('what it did, against its first parent'),
      choose: () => pickCommit(door, folder, null),
    },
    {
      label: vscode.l10n.t('A branch …'),
      description: vscode.l10n.t('what it did since it left another one'),
      choose: () => pickBranch(door, folder),
    },
    {
      label: vscode.l10n.t('Two files …'),
      description: vscode.l10n.t('any two textures, as before and after'),
      choose: () => pickFiles(folder),
    },
  ];
  const chosen = await vscode.window.showQuickPick(kinds, { placeHolder: vscode.l10n.t('What is to be reviewed?') });
  return (await chosen?.choose()) ?? null;
}

/** Asks for a commit, of those that touched a file where one is given. */
export async function pickCommit(door: ReviewDoor, folder: string, path: string | null): Promise<ReviewSubject | null> {
  const commits = await door.commits(folder, path, MOST_COMMITS);
  if (commits.length === 0) {
    void vscode.window.showInformationMessage(vscode.l10n.t('There is no commit yet.'));
    return null;
  }
  const when = new Intl.DateTimeFormat(vscode.env.language, { dateStyle: 'medium', timeStyle: 'short' });
  const items = commits.map(({ id, subject, author, time }) => ({
    label: subject,
    description: id.slice(0, 10),
    detail: `${author}, ${when.format(time * 1000)}`,
    id,
  }));
  const chosen = await vscode.window.showQuickPick(items, {
    placeHolder: vscode.l10n.t('Which commit?'),
    matchOnDescription: true,
    matchOnDetail: true,
  });
  return chosen === undefined ? null : { kind: 'range', folder, range: { kind: 'commit', commit: chosen.id } };
}

const MOST_COMMITS = 500;

async function pickBranch(door: ReviewDoor, folder: string): Promise<ReviewSubject | null> {
  const branches = await door.branches(folder);
  const current = branches.filter((each) => each.current === 'yes');
  const tip = await pickName([...current, ...branches.filter((each) => each.current === 'no')], {
    placeHolder: vscode.l10n.t('Which branch is to be reviewed?'),
  });
  if (tip === null) return null;
  const base = await pickName(
    branches.filter(({ name }) => name !== tip),
    { placeHolder: vscode.l10n.t('Since it left which branch?') },
  );
  return base === null ? null : { kind: 'range', folder, range: { kind: 'branch', base, tip } };
}

async function pickName(branches: readonly BranchLine[], options: { readonly placeHolder: string }) {
  if (branches.length === 0) {
    void vscode.window.showInformationMessage(vscode.l10n.t('There is no other branch.'));
    return null;
  }
  const items = branches.map(({ name, current }) => ({
    label: name,
    ...(current === 'yes' && { description: vscode.l10n.t('checked out') }),
  }));
  return (await vscode.window.showQuickPick(items, options))?.label ?? null;
}

async function pickFiles(folder: string): Promise<ReviewSubject | null> {
  const before = await pickFile(vscode.l10n.t('Choose the texture before'), folder);
  if (before === null) return null;
  const after = await pickFile(vscode.l10n.t('Choose the texture after'), folder);
  return after === null ? null : { kind: 'files', before, after };
}

async function pickFile(title: string, folder: string): Promise<string | null> {
  const chosen = await vscode.window.showOpenDialog({
    title,
    defaultUri: vscode.Uri.file(folder),
    filters: { [vscode.l10n.t('Textures')]: ['png', 'tga', 'PNG', 'TGA'] },
  });
  return chosen?.[0]?.fsPath.replaceAll('\\', '/') ?? null;
}
