import * as vscode from 'vscode';
import type { FileEntry, FileTree } from '../../../core/port.ts';
import { SETTINGS_NAME } from '../../../core/treatment/find/root.ts';
import { joinPath } from '../../../core/treatment/paths/path.ts';
import type { Platform } from '../platform.ts';

/** A file system as the house's paths see it: `/a/b` or `C:/a/b` within one scheme and authority. */
export interface FilePlace {
  /** Open settings files are read as they are typed. */
  readonly tree: FileTree;
  pathOf(uri: vscode.Uri): string;
  uriOf(path: string): vscode.Uri;
}

/** The file system that a resource lies in. */
export function placeOf(resource: vscode.Uri, platform: Platform): FilePlace {
  const uriOf = (path: string) => uriFor(resource, path);
  const saved = isOnDisk(resource, platform) ? platform.disk.tree : treeOf(resource);
  const tree: FileTree = {
    ...saved,
    async read(path) {
      const typed = path.endsWith(`/${SETTINGS_NAME}`) ? typedText(uriOf(path)) : null;
      return typed === null ? saved.read(path) : platform.encodeUtf8(typed);
    },
  };
  return { tree, pathOf, uriOf };
}

/** Whether builds can work there. */
export function isOnDisk(
  resource: vscode.Uri,
  platform: Platform,
): platform is Platform & { disk: NonNullable<Platform['disk']> } {
  return resource.scheme === 'file' && platform.disk !== null;
}

/** The house's path of a resource. */
export function pathOf(uri: vscode.Uri): string {
  const unc = uri.authority !== '' && uri.scheme === 'file' ? `//${uri.authority}` : '';
  // A drive's path is `/c:/a` in a resource.
  return `${unc}${uri.path.replace(/^\/(?=[A-Za-z]:)/, '')}`;
}

/** Settings files that are open and not saved, by path. */
export function unsavedSettings(): ReadonlyMap<string, string> {
  const dirty = vscode.workspace.textDocuments.filter((each) => each.isDirty && isSettings(each.uri));
  return new Map(dirty.map((each) => [pathOf(each.uri), each.getText()]));
}

export function isSettings(uri: vscode.Uri): boolean {
  return uri.path.endsWith(`/${SETTINGS_NAME}`);
}

function uriFor(resource: vscode.Uri, path: string): vscode.Uri {
  if (resource.scheme === 'file') return vscode.Uri.file(path);
  return resource.with({ path: path.startsWith('/') ? path : `/${path}`, query: '', fragment: '' });
}

function typedText(uri: vscode.Uri): string | null {
  const open = vscode.workspace.textDocuments.find((each) => each.uri.toString() === uri.toString());
  return open?.isDirty ? open.getText() : null;
}

/** A tree over the editor's own file systems, which know no links to follow. */
function treeOf(resource: vscode.Uri): FileTree {
  const fs = vscode.workspace.fs;
  const at = (path: string) => uriFor(resource, path);
  return {
    async list(folder) {
      const entries = await there(fs.readDirectory(at(folder)));
      return entries?.map(([name, type]): FileEntry => ({ name, kind: kindOf(type) })) ?? null;
    },
    async read(path) {
      return there(fs.readFile(at(path)));
    },
    async readHead(path, byteCount) {
      return (await there(fs.readFile(at(path))))?.subarray(0, byteCount) ?? null;
    },
    async kind(path) {
      const stat = await there(fs.stat(at(path)));
      if (stat === null) return null;
      return stat.type & vscode.FileType.Directory ? 'folder' : stat.type & vscode.FileType.File ? 'file' : null;
    },
    async realPath(path) {
      return joinPath(path, '');
    },
  };
}

function kindOf(type: vscode.FileType): FileEntry['kind'] {
  const isLink = (type & vscode.FileType.SymbolicLink) !== 0;
  if (type & vscode.FileType.Directory) return isLink ? 'folder-link' : 'folder';
  if (type & vscode.FileType.File) return isLink ? 'file-link' : 'file';
  return isLink ? 'lost' : 'other';
}

/** What a file system refuses is not there, as the port says. */
async function there<T>(asked: Thenable<T>): Promise<T | null> {
  try {
    return await asked;
  } catch (error) {
    if (error instanceof vscode.FileSystemError) return null;
    throw error;
  }
}
