import * as vscode from 'vscode';
import { type HostEvent, PROTOCOL } from '../../../core/protocol.ts';
import type { BuildDesk } from '../build/desk.ts';
import { isSettings } from '../files/place.ts';
import type { Platform } from '../platform.ts';
import type { TextureCounts } from './counts.ts';
import type { ProofDocument } from './document.ts';

/** Events come in heaps: a file that is written, a build that lays down many. They are waited out for this long. */
const QUIET_MS = 120;

type Change = HostEvent['kind'];

/** Tells a proof what changed around its texture: its file, the settings as they are typed and as they are saved, its outputs. */
export function watchTexture(
  document: ProofDocument,
  { platform, desk, counts }: { readonly platform: Platform; readonly desk: BuildDesk; readonly counts: TextureCounts },
  tell: (event: HostEvent) => void,
): vscode.Disposable {
  const changes = new Set<Change>();
  let timer: { dispose(): void } | null = null;
  let isOver = false;
  const folder = vscode.Uri.joinPath(document.uri, '..');
  const source = watcherOf(new vscode.RelativePattern(folder, escapeGlob(document.name)), () => note('source'));
  const stem = escapeGlob(document.name.replace(/\.[^.]*$/, ''));
  const outputs = watcherOf(manifestsOf(document, stem), () => note('built'));
  const settings = watcherOf('**/sizeproof.json', () => note('settings'));
  const typed = vscode.workspace.onDidChangeTextDocument((event) => {
    if (isSettings(event.document.uri) && event.contentChanges.length > 0) note('settings');
  });
  const files = vscode.workspace.createFileSystemWatcher('**/*.{png,tga,PNG,TGA}', false, true, false);
  const forget = () => counts.forget();
  return vscode.Disposable.from(
    source,
    outputs,
    settings,
    typed,
    files,
    files.onDidCreate(forget),
    files.onDidDelete(forget),
    desk.onDidBuild(() => note('built')),
    new vscode.Disposable(() => {
      isOver = true;
      timer?.dispose();
    }),
  );

  function note(change: Change): void {
    changes.add(change);
    timer?.dispose();
    timer = platform.after(QUIET_MS, () => void send());
  }

  async function send(): Promise<void> {
    const kinds = [...changes];
    changes.clear();
    const revision = ++document.revision;
    // Whatever moves may make the outputs stale.
    for (const kind of new Set<Change>([...kinds, 'built'])) {
      const event = await eventOf(kind, revision);
      if (isOver || revision !== document.revision) return;
      tell(event);
    }
  }

  async function eventOf(kind: Change, revision: number): Promise<HostEvent> {
    switch (kind) {
      case 'source':
        return { protocol: PROTOCOL, kind, revision, present: await isPresent(document.uri) };
      case 'settings':
        return { protocol: PROTOCOL, kind, revision, settings: await document.settingsReply() };
      case 'built':
        return { protocol: PROTOCOL, kind, revision, state: await document.builtState() };
    }
  }
}

function watcherOf(pattern: vscode.GlobPattern, act: () => void): vscode.Disposable {
  const watcher = vscode.workspace.createFileSystemWatcher(pattern);
  return vscode.Disposable.from(watcher, watcher.onDidCreate(act), watcher.onDidChange(act), watcher.onDidDelete(act));
}

/** The texture's manifest, wherever its settings put it. */
function manifestsOf(document: ProofDocument, stem: string): vscode.GlobPattern {
  const folder = vscode.workspace.getWorkspaceFolder(document.uri);
  const pattern = `**/${stem}.mips.json`;
  return folder === undefined ? new vscode.RelativePattern(vscode.Uri.joinPath(document.uri, '..'), pattern) : pattern;
}

/** A name as the host's globs have it. */
function escapeGlob(name: string): string {
  return name.replace(/[*?[\]{}]/g, (character) => `[${character}]`);
}

async function isPresent(uri: vscode.Uri): Promise<boolean> {
  try {
    await vscode.workspace.fs.stat(uri);
    return true;
  } catch (error) {
    if (error instanceof vscode.FileSystemError) return false;
    throw error;
  }
}
