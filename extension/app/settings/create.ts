import * as vscode from 'vscode';
import type { Problem } from '../../../core/problem.ts';
import { settingsTemplate } from '../../../core/treatment/edit/template.ts';
import { SETTINGS_NAME } from '../../../core/treatment/find/root.ts';
import type { Platform } from '../platform.ts';
import { sayProblem } from '../words.ts';

/** Writes a settings file to start from into a folder, and shows it. An existing one is shown and left as it is. */
export async function createSettings(folder: vscode.Uri, platform: Platform): Promise<void> {
  const hindrance = hindranceToWriting(folder);
  if (hindrance !== null) {
    void vscode.window.showErrorMessage(sayProblem(hindrance));
    return;
  }
  const file = vscode.Uri.joinPath(folder, SETTINGS_NAME);
  if (!(await isThere(file))) await vscode.workspace.fs.writeFile(file, platform.encodeUtf8(settingsTemplate));
  await vscode.window.showTextDocument(file);
}

/** Why nothing may be written below a folder; null where it may. */
export function hindranceToWriting(folder: vscode.Uri): Problem | null {
  const place = { severity: 'error', values: {}, path: folder.path } as const;
  if (!vscode.workspace.isTrusted) return { code: 'untrusted', ...place };
  if (vscode.workspace.fs.isWritableFileSystem(folder.scheme) === false) return { code: 'read-only', ...place };
  return null;
}

export async function isThere(file: vscode.Uri): Promise<boolean> {
  try {
    await vscode.workspace.fs.stat(file);
    return true;
  } catch (error) {
    if (error instanceof vscode.FileSystemError) return false;
    throw error;
  }
}
