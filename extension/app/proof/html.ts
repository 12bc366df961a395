import * as vscode from 'vscode';
import { pagePolicy } from './policy.ts';

/** The page's document, in the webview's own terms: a proof's, or a review's. */
export function pageHtml(
  webview: vscode.Webview,
  folder: vscode.Uri,
  nonce: string,
  about: 'proof' | 'review' = 'proof',
): string {
  const at = (name: string) => webview.asWebviewUri(vscode.Uri.joinPath(folder, name)).toString();
  const policy = pagePolicy(webview.cspSource, nonce);
  return `<!doctype html>
<html lang="${quoted(vscode.env.language)}">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${quoted(policy)}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<link rel="stylesheet" href="${quoted(at('page.css'))}">
<title>${quoted(about === 'proof' ? vscode.l10n.t('Proof') : vscode.l10n.t('Review'))}</title>
</head>
<body data-about="${about}" data-worker="${quoted(at('worker.js'))}">
<script nonce="${nonce}" src="${quoted(at('page.js'))}"></script>
</body>
</html>`;
}

function quoted(text: string): string {
  return text.replace(/[&<>"']/g, (character) => `&#${character.charCodeAt(0)};`);
}
