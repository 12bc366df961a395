import * as vscode from 'vscode';
import { Refusal } from '../../core/problem.ts';
import type { BuildKind } from './build/desk.ts';
import { TextureCounts } from './proof/counts.ts';
import { type EditorTools, VIEW_TYPE } from './proof/editor.ts';
import { exportByCommand } from './proof/export-command.ts';
import { TextureFacts } from './proof/facts.ts';
import { reportOf, revealOutputs } from './proof/outputs.ts';
import { closePreviewOf } from './proof/preview-tab.ts';
import { type ReviewParts, reviewCommands } from './review/commands.ts';
import { selectedResources, selectedTexture } from './selected.ts';
import { createSettings, isThere } from './settings/create.ts';
import { explain } from './settings/explain.ts';
import { openSettings } from './settings/open.ts';
import { sayProblem } from './words.ts';

/** The host hands over what was clicked and all that is selected; source control's menus hand over what is selected. */
type Command = (...given: readonly unknown[]) => unknown;

/** Registers every command of the extension. The explorer hands over the item that was clicked and all that are selected. */
export function registerCommands(
  { platform, desk, log, open }: EditorTools,
  reviews: ReviewParts,
  pages: vscode.Uri,
): vscode.Disposable {
  const aboutTexture = (act: (texture: vscode.Uri) => Promise<void>) => async (first: unknown, all: unknown) => {
    const texture = await selectedTexture(first, all);
    if (texture !== null) await act(texture);
  };
  const factsOf = (texture: vscode.Uri) => new TextureFacts(texture, platform, new TextureCounts());
  const building = (kind: BuildKind) => async (first: unknown, all: unknown) => {
    const resources = await resourcesOrWorkspace(first, all);
    return resources.length === 0 ? null : desk.build(kind, resources, 'shown');
  };
  const commands: Readonly<Record<string, Command>> = {
    ...reviewCommands(reviews),
    openProof: async (first, all) => {
      const texture = await selectedTexture(first, all);
      const textures = first === undefined ? [] : selectedResources(first, all);
      for (const each of textures.length > 1 ? textures : texture === null ? [] : [texture]) {
        await vscode.commands.executeCommand('vscode.openWith', each, VIEW_TYPE);
        await closePreviewOf(each);
      }
    },
    exportProof: aboutTexture((texture) => exportByCommand(factsOf(texture), open, { platform, pages })),
    build: building('build'),
    buildAndPrune: building('prune'),
    rebuild: building('rebuild'),
    check: async (first, all) => {
      const resources = await resourcesOrWorkspace(first, all);
      return resources.length === 0 ? null : desk.check(resources);
    },
    explain: aboutTexture((texture) => explain(texture)),
    createSettings: async (first, all) => {
      const [resource] = await resourcesOrWorkspace(first, all);
      if (resource !== undefined) await createSettings(await folderOf(resource), platform);
    },
    openSettings: aboutTexture((texture) => openSettings(texture, null, platform)),
    revealOutputs: aboutTexture((texture) => revealOutputs(factsOf(texture))),
    copyReport: aboutTexture(async (texture) => {
      await vscode.env.clipboard.writeText(await reportOf(factsOf(texture)));
      vscode.window.setStatusBarMessage(vscode.l10n.t('The report is on the clipboard.'), SHOWN_MS);
    }),
    showLog: () => log.show(),
  };
  const registered = Object.entries(commands).map(([name, act]) =>
    vscode.commands.registerCommand(`sizeproof.${name}`, (...given: readonly unknown[]) => saying(act, given)),
  );
  return vscode.Disposable.from(...registered);
}

/** How long a message stays in the status bar. */
const SHOWN_MS = 4000;

/** What is refused is said; anything else goes on to the host, which says that the command failed. */
async function saying(act: Command, given: readonly unknown[]): Promise<unknown> {
  try {
    return await act(...given);
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    void vscode.window.showErrorMessage(sayProblem(error.problem));
    return null;
  }
}

/** What was handed over, else the workspace's folder; asks which where it has several. */
async function resourcesOrWorkspace(first: unknown, all: unknown): Promise<vscode.Uri[]> {
  const given = first === undefined ? [] : selectedResources(first, all);
  if (given.length > 0) return given;
  const folders = vscode.workspace.workspaceFolders ?? [];
  if (folders.length === 1) return [folders[0].uri];
  if (folders.length > 1) {
    const chosen = await vscode.window.showWorkspaceFolderPick();
    return chosen === undefined ? [] : [chosen.uri];
  }
  void vscode.window.showInformationMessage(vscode.l10n.t('Open a folder that holds textures first.'));
  return [];
}

async function folderOf(resource: vscode.Uri): Promise<vscode.Uri> {
  if (!(await isThere(resource))) return resource;
  const { type } = await vscode.workspace.fs.stat(resource);
  return type & vscode.FileType.Directory ? resource : vscode.Uri.joinPath(resource, '..');
}
