import * as vscode from 'vscode';
import { isSettings } from '../files/place.ts';
import type { Platform } from '../platform.ts';
import { readConfiguration } from '../settings/configuration.ts';
import type { BuildDesk } from './desk.ts';

/** A change on disk comes as several events: they are waited out for this long. */
const QUIET_MS = 300;

/** Builds by itself what the setting `buildOnSave` asks for: below a settings file that was saved, and with `sources` every source
 *  that changes. Outputs that a build itself writes are no textures, so it does not run in circles. */
export function buildOnSave(desk: BuildDesk, platform: Platform): vscode.Disposable {
  const waiting = new Map<string, vscode.Uri>();
  let timer: { dispose(): void } | null = null;
  const watcher = vscode.workspace.createFileSystemWatcher('**/*.{png,tga,PNG,TGA}');
  const sourceChanged = (uri: vscode.Uri) => {
    if (readConfiguration(uri).buildOnSave === 'sources') order(uri);
  };
  return vscode.Disposable.from(
    watcher,
    watcher.onDidCreate(sourceChanged),
    watcher.onDidChange(sourceChanged),
    vscode.workspace.onDidSaveTextDocument(({ uri }) => {
      if (isSettings(uri) && readConfiguration(uri).buildOnSave !== 'off') order(vscode.Uri.joinPath(uri, '..'));
    }),
    new vscode.Disposable(() => timer?.dispose()),
  );

  function order(uri: vscode.Uri): void {
    if (!vscode.workspace.isTrusted || uri.scheme !== 'file' || platform.disk === null) return;
    waiting.set(uri.toString(), uri);
    timer?.dispose();
    timer = platform.after(QUIET_MS, () => {
      const resources = [...waiting.values()];
      waiting.clear();
      void desk.build('build', resources, 'quiet');
    });
  }
}
