import * as vscode from 'vscode';
import { type HostEvent, PROTOCOL } from '../../../core/protocol.ts';
import type { BuildDesk } from '../build/desk.ts';
import { isSettings } from '../files/place.ts';
import type { Platform } from '../platform.ts';
import { readConfiguration } from '../settings/configuration.ts';
import { isThere } from '../settings/create.ts';
import type { TextureCounts } from './counts.ts';
import type { TextureFacts } from './facts.ts';

/** Events come in heaps: a file that is written, a build that lays down many. They are waited out for this long. */
const QUIET_MS = 120;

type Change = Exclude<HostEvent['kind'], 'export'>;

/** Tells what changes around a texture: its file, the settings as they are typed and as they are saved, its outputs. */
export function watchTexture(
  texture: TextureFacts,
  { platform, desk, counts, report }: WatchTools,
  listener: {
    nextRevision(): number;
    tell(event: HostEvent): void;
  },
): vscode.Disposable {
  const changes = new Set<Change>();
  let timer: { dispose(): void } | null = null;
  let last: Promise<void> = Promise.resolve();
  let isOver = false;
  const folder = vscode.Uri.joinPath(texture.uri, '..');
  const source = watcherOf(new vscode.RelativePattern(folder, escapeGlob(texture.name)), () => note('source'));
  const stem = escapeGlob(texture.name.replace(/\.[^.]*$/, ''));
  const outputs = watcherOf(manifestsOf(texture, stem), () => note('built'));
  const settings = watcherOf('**/sizeproof.json', () => note('settings'));
  const typed = vscode.workspace.onDidChangeTextDocument((event) => {
    if (isSettings(event.document.uri) && event.contentChanges.length > 0) note('settings');
  });
  const preferences = vscode.workspace.onDidChangeConfiguration((event) => {
    if (event.affectsConfiguration('sizeproof', texture.uri)) note('preferences');
  });
  const images = vscode.workspace.createFileSystemWatcher('**/*.{png,tga,PNG,TGA}');
  const imageChanged = (uri: vscode.Uri) => {
    if (texture.isRoughness(uri)) note('source');
  };
  const imagesMoved = (uri: vscode.Uri) => {
    counts.forget();
    imageChanged(uri);
  };
  return vscode.Disposable.from(
    source,
    outputs,
    settings,
    typed,
    preferences,
    images,
    images.onDidChange(imageChanged),
    images.onDidCreate(imagesMoved),
    images.onDidDelete(imagesMoved),
    desk.onDidBuild(() => note('built')),
    new vscode.Disposable(() => {
      isOver = true;
      timer?.dispose();
    }),
  );

  function note(change: Change): void {
    changes.add(change);
    timer?.dispose();
    timer = platform.after(QUIET_MS, () => {
      // One after another, so that what is told last is what was found last.
      last = last.then(send).catch(report);
    });
  }

  async function send(): Promise<void> {
    // Whatever moves may make the outputs stale.
    const kinds = new Set<Change>([...changes, 'built']);
    changes.clear();
    const revision = listener.nextRevision();
    for (const kind of kinds) {
      const event = await eventOf(kind, revision);
      if (isOver) return;
      listener.tell(event);
    }
  }

  async function eventOf(kind: Change, revision: number): Promise<HostEvent> {
    switch (kind) {
      case 'source':
        return { protocol: PROTOCOL, kind, revision, present: await isThere(texture.uri) };
      case 'settings':
        return { protocol: PROTOCOL, kind, revision, settings: await texture.settingsReply() };
      case 'preferences':
        return { protocol: PROTOCOL, kind, revision, preferences: readConfiguration(texture.uri).preferences };
      case 'built':
        return { protocol: PROTOCOL, kind, revision, state: await texture.builtState() };
    }
  }
}

export interface WatchTools {
  readonly platform: Platform;
  readonly desk: BuildDesk;
  readonly counts: TextureCounts;
  /** Hears of what should not happen. */
  readonly report: (error: unknown) => void;
}

function watcherOf(pattern: vscode.GlobPattern, act: () => void): vscode.Disposable {
  const watcher = vscode.workspace.createFileSystemWatcher(pattern);
  return vscode.Disposable.from(watcher, watcher.onDidCreate(act), watcher.onDidChange(act), watcher.onDidDelete(act));
}

/** The texture's manifest, wherever its settings put it. */
function manifestsOf(texture: TextureFacts, stem: string): vscode.GlobPattern {
  const folder = vscode.workspace.getWorkspaceFolder(texture.uri);
  const pattern = `**/${stem}.mips.json`;
  return folder === undefined ? new vscode.RelativePattern(vscode.Uri.joinPath(texture.uri, '..'), pattern) : pattern;
}

/** A name as the host's globs have it. */
function escapeGlob(name: string): string {
  return name.replace(/[*?[\]{}]/g, (character) => `[${character}]`);
}
