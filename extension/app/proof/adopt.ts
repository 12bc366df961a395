import * as vscode from 'vscode';
import { Refusal, refuse } from '../../../core/problem.ts';
import type { AdoptChange } from '../../../core/protocol.ts';
import { adoptSettings } from '../../../core/treatment/edit/adopt.ts';
import { SETTINGS_NAME } from '../../../core/treatment/find/root.ts';
import { pathBelow } from '../../../core/treatment/paths/path.ts';
import { pathOf } from '../files/place.ts';
import type { Platform } from '../platform.ts';
import { hindranceToWriting } from '../settings/create.ts';
import { folderForSettings, matchingRule } from '../settings/open.ts';
import { settingsOf } from '../settings/texture.ts';

/** Puts settings into a texture's settings file: in an editor beside the proof, as one undo step, not saved. Without a file
 *  one is begun, as empty as can be. Throws Refusal. */
export async function adopt(resource: vscode.Uri, change: AdoptChange, platform: Platform): Promise<{ path: string }> {
  const settings = await settingsOf(resource, platform);
  const hindrance = hindranceToWriting(resource);
  if (hindrance !== null) throw new Refusal(hindrance);
  const { root, place, file } = settings;
  const isNew = root.file === null;
  const uri = root.file === null ? await beginFile(resource, platform) : place.uriOf(root.file);
  const document = await vscode.workspace.openTextDocument(uri);
  const rule = matchingRule(settings);
  if (change.scope === 'matching' && rule === null) refuse('no-treatment', { path: settings.path });
  const folder = isNew ? await place.tree.realPath(pathOf(vscode.Uri.joinPath(uri, '..'))) : root.folder;
  const texture = (pathBelow(folder, file) ?? settings.path).normalize('NFC');
  const adopter = change.scope === 'matching' && rule !== null ? { treatment: rule.index } : { texture };
  const found = adoptSettings(document.getText(), pathOf(uri), adopter, change.settings);
  const range = new vscode.Range(document.positionAt(found.offset), document.positionAt(found.offset + found.length));
  const edit = new vscode.WorkspaceEdit();
  edit.replace(uri, range, found.text);
  await vscode.workspace.applyEdit(edit);
  const lead = found.text.length - found.text.trimStart().length;
  const [start, end] = [lead, found.text.trimEnd().length].map((at) => document.positionAt(found.offset + at));
  await vscode.window.showTextDocument(document, {
    viewColumn: vscode.ViewColumn.Beside,
    preserveFocus: true,
    preview: false,
    selection: new vscode.Range(start, end),
  });
  return { path: vscode.workspace.asRelativePath(uri) };
}

/** A settings file that says nothing yet: what is adopted is not saved for the user, but it needs a file to be typed into. */
async function beginFile(resource: vscode.Uri, platform: Platform): Promise<vscode.Uri> {
  const uri = vscode.Uri.joinPath(await folderForSettings(resource), SETTINGS_NAME);
  await vscode.workspace.fs.writeFile(uri, platform.encodeUtf8('{\n  "treatments": [\n  ]\n}\n'));
  return uri;
}
