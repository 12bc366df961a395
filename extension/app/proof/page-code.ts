import * as vscode from 'vscode';
import type { PageCode } from '../../../core/export/document.ts';
import { decodeUtf8 } from '../../../core/treatment/paths/utf8.ts';

/** The built page's code, for pages that stand alone. */
export async function readPageCode(pages: vscode.Uri): Promise<PageCode> {
  const read = async (name: string): Promise<string> => {
    const bytes = await vscode.workspace.fs.readFile(vscode.Uri.joinPath(pages, name));
    return decodeUtf8(bytes) ?? '';
  };
  const [script, worker, style] = await Promise.all(['page.js', 'worker.js', 'page.css'].map(read));
  return { script, worker, style };
}
