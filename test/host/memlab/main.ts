import { readdirSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import * as vscode from 'vscode';

interface Entry extends vscode.FileStat {
  readonly bytes: Uint8Array;
}

/** A file system in memory, filled from the folder `seed` beside this file: a workspace without a disk. */
export function activate(context: vscode.ExtensionContext): void {
  const changed = new vscode.EventEmitter<vscode.FileChangeEvent[]>();
  const entries = new Map<string, Entry>([['/', entry(null)]]);
  fill(join(__dirname, 'seed'), '');
  const tell = (type: vscode.FileChangeType, uri: vscode.Uri) => changed.fire([{ type, uri }]);
  const provider: vscode.FileSystemProvider = {
    onDidChangeFile: changed.event,
    watch: () => new vscode.Disposable(() => undefined),
    stat: find,
    readDirectory(uri) {
      find(uri);
      const start = uri.path.endsWith('/') ? uri.path : `${uri.path}/`;
      return [...entries]
        .filter(([path]) => path !== '/' && path.startsWith(start) && !path.slice(start.length).includes('/'))
        .map(([path, { type }]) => [path.slice(start.length), type]);
    },
    readFile: (uri) => find(uri).bytes,
    writeFile(uri, bytes) {
      const type = entries.has(uri.path) ? vscode.FileChangeType.Changed : vscode.FileChangeType.Created;
      entries.set(uri.path, entry(bytes));
      tell(type, uri);
    },
    createDirectory(uri) {
      entries.set(uri.path, entry(null));
      tell(vscode.FileChangeType.Created, uri);
    },
    delete(uri) {
      entries.delete(uri.path);
      tell(vscode.FileChangeType.Deleted, uri);
    },
    rename() {
      throw vscode.FileSystemError.NoPermissions();
    },
  };
  context.subscriptions.push(
    vscode.workspace.registerFileSystemProvider('memlab', provider, { isCaseSensitive: true }),
  );

  function find(uri: vscode.Uri): Entry {
    const found = entries.get(uri.path);
    if (found === undefined) throw vscode.FileSystemError.FileNotFound(uri);
    return found;
  }

  function fill(from: string, path: string): void {
    for (const name of readdirSync(from)) {
      const source = join(from, name);
      const isFolder = statSync(source).isDirectory();
      entries.set(`${path}/${name}`, entry(isFolder ? null : readFileSync(source)));
      if (isFolder) fill(source, `${path}/${name}`);
    }
  }
}

/** A file of some bytes; a folder for null. */
function entry(bytes: Uint8Array | null): Entry {
  const type = bytes === null ? vscode.FileType.Directory : vscode.FileType.File;
  const copy = new Uint8Array(bytes ?? []);
  return { type, ctime: 0, mtime: Date.now(), size: copy.length, bytes: copy };
}
