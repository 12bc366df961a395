import * as vscode from 'vscode';
import { refuse } from '../../../core/problem.ts';
import type { Platform } from '../platform.ts';

/** Writes a file of any file system so that it is at every moment wholly old or wholly new: beside its place first. Throws
 *  Refusal. */
export async function writeWhole(target: vscode.Uri, bytes: Uint8Array, platform: Platform): Promise<void> {
  const name = target.path.slice(target.path.lastIndexOf('/') + 1);
  const unique = platform.newNonce().replace(/[^A-Za-z0-9]/g, '');
  const beside = vscode.Uri.joinPath(target, '..', `.${name}.${unique}.tmp`);
  try {
    await vscode.workspace.fs.writeFile(beside, bytes);
    await vscode.workspace.fs.rename(beside, target, { overwrite: true });
  } catch (error) {
    if (!(error instanceof vscode.FileSystemError)) throw error;
    await remove(beside);
    refuse('output-unwritable', { reason: error.message }, { path: target.path });
  }
}

async function remove(file: vscode.Uri): Promise<void> {
  try {
    await vscode.workspace.fs.delete(file);
  } catch (error) {
    // It may never have come to be.
    if (!(error instanceof vscode.FileSystemError)) throw error;
  }
}
