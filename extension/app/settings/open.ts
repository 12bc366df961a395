import * as vscode from 'vscode';
import type { Spot } from '../../../core/treatment/text/place.ts';
import type { Platform } from '../platform.ts';
import { createSettings, isThere } from './create.ts';
import { settingsOf, type TextureSettings } from './texture.ts';

/** Shows the settings file of a texture at what set a key of its treatment, or at the treatment that applies. Without a file,
 *  offers to create one beside the texture's root. */
export async function openSettings(
  resource: vscode.Uri,
  key: string | null,
  platform: Platform,
  column: vscode.ViewColumn = vscode.ViewColumn.Active,
): Promise<void> {
  const settings = await settingsOf(resource, platform);
  if (settings.root.file === null) return offerToCreate(resource, platform);
  const spot = spotOf(settings, key);
  const at = new vscode.Position(spot.line - 1, spot.column - 1);
  await vscode.window.showTextDocument(settings.place.uriOf(settings.root.file), {
    viewColumn: column,
    selection: new vscode.Range(at, at),
  });
}

/** The last treatment that matches a texture; null where none does. The index counts treatments alone. */
export function matchingRule({ root, path }: TextureSettings) {
  const treatments = root.settings?.rules.filter((rule) => rule.match !== null) ?? [];
  const index = treatments.map((rule) => rule.hits(path)).lastIndexOf(true);
  return index < 0 ? null : { index, rule: treatments[index] };
}

function spotOf(settings: TextureSettings, key: string | null): Spot {
  const origin = settings.texture?.origins.find(
    (each) => key !== null && each.line !== undefined && (each.key === key || each.key.startsWith(`${key}.`)),
  );
  if (origin?.line !== undefined && origin.column !== undefined) return { line: origin.line, column: origin.column };
  const [problem] = settings.problems;
  if (problem?.line !== undefined) return { line: problem.line, column: problem.column ?? 1 };
  return matchingRule(settings)?.rule.at ?? { line: 1, column: 1 };
}

async function offerToCreate(resource: vscode.Uri, platform: Platform): Promise<void> {
  const create = vscode.l10n.t('Create Settings File');
  const chosen = await vscode.window.showInformationMessage(
    vscode.l10n.t('No settings file applies to this texture; the built-in defaults do.'),
    create,
  );
  if (chosen === create) await createSettings(await folderForSettings(resource), platform);
}

/** Where a texture's first settings file belongs: its workspace folder, or a repository's top on the way there, beyond which no
 *  settings are looked for. Outside any workspace its own folder. */
export async function folderForSettings(resource: vscode.Uri): Promise<vscode.Uri> {
  const own = vscode.Uri.joinPath(resource, '..');
  const top = vscode.workspace.getWorkspaceFolder(resource)?.uri ?? own;
  for (let folder = own; folder.path !== top.path; folder = vscode.Uri.joinPath(folder, '..')) {
    if (folder.path === '/' || (await isThere(vscode.Uri.joinPath(folder, '.git')))) return folder;
  }
  return top;
}
