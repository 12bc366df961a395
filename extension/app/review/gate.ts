import * as vscode from 'vscode';
import { imageExtension } from '../../../core/codec/open.ts';

/** What this program needs of the editor's own Git extension: which files changed, to offer a review where there are textures
 *  among them. The comparison itself asks Git. */
interface GitApi {
  readonly repositories: readonly GitRepository[];
  readonly onDidOpenRepository: vscode.Event<GitRepository>;
  readonly onDidCloseRepository: vscode.Event<GitRepository>;
}

interface GitRepository {
  readonly rootUri: vscode.Uri;
  readonly state: {
    readonly workingTreeChanges: readonly GitChange[];
    readonly indexChanges: readonly GitChange[];
    readonly mergeChanges: readonly GitChange[];
    readonly untrackedChanges?: readonly GitChange[];
    readonly onDidChange: vscode.Event<void>;
  };
}

interface GitChange {
  readonly uri: vscode.Uri;
}

/** Follows the editor's repositories. */
export class GitGate implements vscode.Disposable {
  readonly #moved: () => void;
  readonly #listening = new Map<GitRepository, vscode.Disposable>();
  #api: GitApi | null = null;
  #owned: vscode.Disposable | null = null;

  /** `moved` hears when a repository changed. */
  constructor(moved: () => void, report: (error: unknown) => void) {
    this.#moved = moved;
    this.#begin().catch(report);
  }

  /** Tops of the repositories that are open. */
  get folders(): readonly vscode.Uri[] {
    return this.#api?.repositories.map(({ rootUri }) => rootUri) ?? [];
  }

  dispose(): void {
    this.#owned?.dispose();
    for (const each of this.#listening.values()) each.dispose();
  }

  async #begin(): Promise<void> {
    const git = vscode.extensions.getExtension<{ readonly enabled: boolean; getAPI(version: 1): GitApi }>('vscode.git');
    const exported = git === undefined ? null : await git.activate();
    // It throws where Git is turned off.
    if (!exported?.enabled) return;
    const api = exported.getAPI(1);
    this.#api = api;
    this.#owned = vscode.Disposable.from(
      api.onDidOpenRepository((repository) => this.#follow(repository)),
      api.onDidCloseRepository((repository) => {
        this.#listening.get(repository)?.dispose();
        this.#listening.delete(repository);
        this.#tell();
      }),
    );
    for (const repository of api.repositories) this.#follow(repository);
  }

  #follow(repository: GitRepository): void {
    this.#listening.get(repository)?.dispose();
    const listening = repository.state.onDidChange(() => {
      this.#tell();
      this.#moved();
    });
    this.#listening.set(repository, listening);
    this.#tell();
  }

  #tell(): void {
    const has = this.#api?.repositories.some(({ state }) => changesOf(state).some(isTexture)) ?? false;
    void vscode.commands.executeCommand('setContext', TEXTURE_CHANGES, has ? 'some' : 'none');
  }
}

/** Whether a repository that is open has textures among its changes: menus hang on it. Until the extension is awake nobody knows, and
 *  they are there, since nothing else of them would wake it. */
const TEXTURE_CHANGES = 'sizeproof.textureChanges';

function changesOf(state: GitRepository['state']): readonly GitChange[] {
  const { workingTreeChanges, indexChanges, mergeChanges, untrackedChanges = [] } = state;
  return [...workingTreeChanges, ...indexChanges, ...mergeChanges, ...untrackedChanges];
}

function isTexture({ uri }: GitChange): boolean {
  return imageExtension(uri.path) !== null;
}
