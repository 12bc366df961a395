import * as vscode from 'vscode';

/** What a menu of source control hands over: the files that were clicked, or a group's, or a whole repository. */
export interface Asked {
  /** Files; empty where a repository is meant. */
  readonly files: readonly vscode.Uri[];
  /** The top of the repository; null where nobody says. */
  readonly root: vscode.Uri | null;
  /** Whether only what is staged is meant. */
  readonly staged: 'yes' | 'no';
}

/** Reads the arguments of a command, and trusts their shapes as little as a page's: they come from another extension's menus. */
export function readAsked(given: readonly unknown[]): Asked {
  const [first] = given;
  if (first instanceof vscode.Uri) {
    const all = Array.isArray(given[1]) ? given[1] : [first];
    return { files: all.filter((each) => each instanceof vscode.Uri), root: null, staged: 'no' };
  }
  const source = first as { readonly rootUri?: unknown } | undefined;
  if (source?.rootUri instanceof vscode.Uri) return { files: [], root: source.rootUri, staged: 'no' };
  const groups = given.filter(isGroup);
  const states = [...groups.flatMap(({ resourceStates }) => resourceStates), ...given];
  const files = states.flatMap((each) => resourceOf(each) ?? []);
  const staged = groups.length > 0 && groups.every(({ id }) => id === 'index') ? 'yes' : 'no';
  return { files, root: null, staged };
}

function isGroup(given: unknown): given is { readonly id: string; readonly resourceStates: readonly unknown[] } {
  return Array.isArray((given as { readonly resourceStates?: unknown } | null)?.resourceStates);
}

/** States that came from another extension host have no resource. */
function resourceOf(state: unknown): vscode.Uri | null {
  const uri = (state as { readonly resourceUri?: unknown } | null | undefined)?.resourceUri;
  return uri instanceof vscode.Uri ? uri : null;
}
