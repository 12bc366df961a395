import * as vscode from 'vscode';
import type { Problem } from '../../../core/problem.ts';
import { pathBelow } from '../../../core/treatment/paths/path.ts';
import { isSettings, pathOf } from '../files/place.ts';
import { severityOf } from '../settings/diagnostics.ts';
import { sayProblem } from '../words.ts';

/** What builds and checks found, in the list of problems. */
export class FoundProblems {
  readonly #collection = vscode.languages.createDiagnosticCollection('sizeproof-build');

  /** Replaces what was known below the resources. Problems of an open settings file are told there, as it is typed. */
  show(resources: readonly vscode.Uri[], problems: readonly Problem[]): void {
    const scopes = resources.map(pathOf);
    const covers = (path: string) => scopes.some((scope) => pathBelow(scope, path) !== null);
    const known: vscode.Uri[] = [];
    this.#collection.forEach((uri) => {
      known.push(uri);
    });
    const placed = problems.filter((each) => each.path !== undefined && !isToldElsewhere(each.path));
    const fresh = new Set(placed.map((each) => each.path));
    for (const uri of known) if (covers(pathOf(uri)) || fresh.has(pathOf(uri))) this.#collection.delete(uri);
    for (const path of fresh) {
      const own = placed.filter((each) => each.path === path);
      this.#collection.set(vscode.Uri.file(path as string), own.map(diagnosticOf));
    }
  }

  dispose(): void {
    this.#collection.dispose();
  }
}

function isToldElsewhere(path: string): boolean {
  return vscode.workspace.textDocuments.some((each) => isSettings(each.uri) && pathOf(each.uri) === path);
}

function diagnosticOf(problem: Problem): vscode.Diagnostic {
  const at = new vscode.Position((problem.line ?? 1) - 1, (problem.column ?? 1) - 1);
  const diagnostic = new vscode.Diagnostic(new vscode.Range(at, at), sayProblem(problem), severityOf(problem));
  diagnostic.source = 'Sizeproof';
  diagnostic.code = problem.code;
  return diagnostic;
}
