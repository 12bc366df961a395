import * as vscode from 'vscode';
import { imageExtension } from '../../core/codec/open.ts';

/** What a command is about: what the explorer hands over (the item and all that are selected), else what the active tab shows. */
export function selectedResources(first: unknown, all: unknown): vscode.Uri[] {
  if (Array.isArray(all) && all.length > 0) return all.filter((each) => each instanceof vscode.Uri);
  if (first instanceof vscode.Uri) return [first];
  const active = activeResource();
  return active === null ? [] : [active];
}

/** The texture that a command is about; asks where there is none. Null where nobody answered. */
export async function selectedTexture(first: unknown, all: unknown): Promise<vscode.Uri | null> {
  const texture = selectedResources(first, all).find((each) => imageExtension(each.path) !== null);
  return texture ?? askForTexture();
}

export function activeResource(): vscode.Uri | null {
  const input = vscode.window.tabGroups.activeTabGroup.activeTab?.input;
  return input instanceof vscode.TabInputCustom || input instanceof vscode.TabInputText ? input.uri : null;
}

async function askForTexture(): Promise<vscode.Uri | null> {
  const chosen = await vscode.window.showOpenDialog({
    title: vscode.l10n.t('Choose a texture'),
    filters: { [vscode.l10n.t('Textures')]: ['png', 'tga', 'PNG', 'TGA'] },
  });
  return chosen?.[0] ?? null;
}
