import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import * as vscode from 'vscode';

export const EXTENSION = 'sizeproof.sizeproof';

/** The folder that the host was opened with. */
export function folder(): vscode.Uri {
  const first = vscode.workspace.workspaceFolders?.[0];
  if (first === undefined) throw new Error('Expected a workspace folder');
  return first.uri;
}

export function inFolder(path: string): vscode.Uri {
  return vscode.Uri.joinPath(folder(), path);
}

/** Writes a file by the editor's file system, as other extensions would. */
export async function write(path: string, text: string): Promise<void> {
  await vscode.workspace.fs.writeFile(inFolder(path), new TextEncoder().encode(text));
}

/** Every file below a folder, by its path in it. */
export function filesBelow(path: string): Map<string, string> {
  const names = readdirSync(path, { recursive: true, withFileTypes: true }).filter((entry) => entry.isFile());
  return new Map(
    names
      .map((entry) => join(entry.parentPath, entry.name))
      .sort()
      .map((file) => [file.slice(path.length + 1), readFileSync(file).toString('base64')]),
  );
}
