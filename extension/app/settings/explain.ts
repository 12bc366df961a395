import * as vscode from 'vscode';
import { explainTexture } from '../../../core/treatment/explain.ts';
import { placeOf } from '../files/place.ts';
import type { Platform } from '../platform.ts';
import { sayProblemLine } from '../words.ts';
import { settingsOf, type TextureSettings } from './texture.ts';

export const EXPLAIN_SCHEME = 'sizeproof-explain';

/** Shows which treatment a texture gets and which rule set each value, as a document whose places lead to the settings file. */
export async function explain(resource: vscode.Uri): Promise<void> {
  const name = resource.path.slice(resource.path.lastIndexOf('/') + 1);
  const uri = vscode.Uri.from({
    scheme: EXPLAIN_SCHEME,
    path: `/${vscode.l10n.t('Treatment of {name}', { name })}`,
    query: resource.toString(),
  });
  const document = await vscode.workspace.openTextDocument(uri);
  await vscode.window.showTextDocument(document, { preview: true });
}

/** Serves those documents, and writes them anew when settings change. */
export function serveExplanations(platform: Platform): vscode.Disposable {
  const changed = new vscode.EventEmitter<vscode.Uri>();
  const refresh = (document: vscode.TextDocument) => {
    if (!document.uri.path.endsWith('/sizeproof.json')) return;
    for (const { uri } of vscode.workspace.textDocuments) if (uri.scheme === EXPLAIN_SCHEME) changed.fire(uri);
  };
  return vscode.Disposable.from(
    changed,
    vscode.workspace.onDidChangeTextDocument(({ document }) => refresh(document)),
    vscode.workspace.onDidSaveTextDocument(refresh),
    vscode.workspace.registerTextDocumentContentProvider(EXPLAIN_SCHEME, {
      onDidChange: changed.event,
      provideTextDocumentContent: (uri) => explanationOf(vscode.Uri.parse(uri.query), platform),
    }),
    vscode.languages.registerDocumentLinkProvider(
      { scheme: EXPLAIN_SCHEME },
      { provideDocumentLinks: (document) => linksIn(document, platform) },
    ),
  );
}

/** The explanation as text: a line a setting. */
export async function explanationOf(resource: vscode.Uri, platform: Platform): Promise<string> {
  return explanationLines(await settingsOf(resource, platform))
    .map((line) => `${line}\n`)
    .join('');
}

export function explanationLines({ root, file, path, texture, problems }: TextureSettings): string[] {
  const nameOf = (each: string) => each;
  const rows = texture === null ? [] : explainTexture(texture);
  const [keyWidth, valueWidth] = [
    rows.map((row) => row.key.length),
    rows.map((row) => JSON.stringify(row.value).length).filter((length) => length <= 40),
  ].map((lengths) => Math.max(0, ...lengths));
  return [
    file,
    vscode.l10n.t('In its root: {path}', { path }),
    root.file === null
      ? vscode.l10n.t('Settings: none, the built-in defaults apply')
      : vscode.l10n.t('Settings: {file}', { file: `${root.file}:1:1` }),
    ...(root.hidden === null ? [] : [vscode.l10n.t('Without effect here: {file}', { file: `${root.hidden}:1:1` })]),
    '',
    ...problems.map((problem) => sayProblemLine(problem, nameOf)),
    ...rows.map(({ key, value, rule, place }) => {
      const where = place === null ? rule : `${rule}  ${place.path}:${place.line}:${place.column}`;
      return `${key.padEnd(keyWidth)}  ${JSON.stringify(value).padEnd(valueWidth)}  ${where}`;
    }),
  ];
}

/** Places at the ends of lines. */
function linksIn(document: vscode.TextDocument, platform: Platform): vscode.DocumentLink[] {
  const { uriOf } = placeOf(vscode.Uri.parse(document.uri.query), platform);
  return document
    .getText()
    .split('\n')
    .flatMap((line, row) => {
      const found = /((?:[A-Za-z]:)?\/.*\/sizeproof\.json):(\d+):(\d+)/.exec(line);
      if (found === null) return [];
      const [whole, path, at, column] = found;
      const range = new vscode.Range(row, found.index, row, found.index + whole.length);
      return [new vscode.DocumentLink(range, uriOf(path).with({ fragment: `L${at},${column}` }))];
    });
}
