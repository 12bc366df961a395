import * as vscode from 'vscode';
import type { Problem } from '../../../core/problem.ts';
import { repairOf, tokenLength } from '../../../core/treatment/edit/repair.ts';
import { parseSettings } from '../../../core/treatment/settings.ts';
import { isSettings } from '../files/place.ts';
import { sayProblem } from '../words.ts';

/** Keeps the problems of open settings files in the list of problems, and offers repairs. */
export function watchSettings(): vscode.Disposable {
  const collection = vscode.languages.createDiagnosticCollection('sizeproof');
  const judge = (document: vscode.TextDocument) => {
    if (isSettings(document.uri))
      collection.set(
        document.uri,
        problemsOf(document).map(({ diagnostic }) => diagnostic),
      );
  };
  for (const document of vscode.workspace.textDocuments) judge(document);
  return vscode.Disposable.from(
    collection,
    vscode.workspace.onDidOpenTextDocument(judge),
    vscode.workspace.onDidChangeTextDocument(({ document }) => judge(document)),
    vscode.workspace.onDidCloseTextDocument(({ uri }) => collection.delete(uri)),
    vscode.languages.registerCodeActionsProvider(
      { pattern: '**/sizeproof.json' },
      { provideCodeActions: (document, range) => repairsIn(document, range) },
      { providedCodeActionKinds: [vscode.CodeActionKind.QuickFix] },
    ),
  );
}

interface Shown {
  readonly problem: Problem;
  readonly diagnostic: vscode.Diagnostic;
}

function problemsOf(document: vscode.TextDocument): readonly Shown[] {
  const text = document.getText();
  return parseSettings(text, document.uri.path).problems.map((problem) => {
    const start = new vscode.Position((problem.line ?? 1) - 1, (problem.column ?? 1) - 1);
    const end = document.positionAt(document.offsetAt(start) + tokenLength(text, document.offsetAt(start)));
    const diagnostic = new vscode.Diagnostic(new vscode.Range(start, end), sayProblem(problem), severityOf(problem));
    diagnostic.source = 'Sizeproof';
    diagnostic.code = problem.code;
    return { problem, diagnostic };
  });
}

function repairsIn(document: vscode.TextDocument, range: vscode.Range): vscode.CodeAction[] {
  return problemsOf(document).flatMap(({ problem, diagnostic }) => {
    const repair = repairOf(problem);
    if (repair === null || diagnostic.range.intersection(range) === undefined) return [];
    const action = new vscode.CodeAction(
      vscode.l10n.t('Replace with {repair}', { repair }),
      vscode.CodeActionKind.QuickFix,
    );
    action.edit = new vscode.WorkspaceEdit();
    action.edit.replace(document.uri, diagnostic.range, repair);
    action.diagnostics = [diagnostic];
    action.isPreferred = true;
    return [action];
  });
}

export function severityOf({ severity }: Problem): vscode.DiagnosticSeverity {
  return severity === 'error' ? vscode.DiagnosticSeverity.Error : vscode.DiagnosticSeverity.Warning;
}
