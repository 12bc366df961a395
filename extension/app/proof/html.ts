import * as vscode from 'vscode';

/** The page's document. It may run its own script and a worker that it makes from fetched code, load its own style, and nothing
 *  else: pixels come by message. */
export function pageHtml(webview: vscode.Webview, folder: vscode.Uri, nonce: string): string {
  const at = (name: string) => webview.asWebviewUri(vscode.Uri.joinPath(folder, name)).toString();
  const policy = [
    "default-src 'none'",
    `img-src ${webview.cspSource} blob: data:`,
    `style-src ${webview.cspSource}`,
    `font-src ${webview.cspSource}`,
    `script-src 'nonce-${nonce}'`,
    'worker-src blob:',
    `connect-src ${webview.cspSource}`,
  ].join('; ');
  return `<!doctype html>
<html lang="${quoted(vscode.env.language)}">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${quoted(policy)}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<link rel="stylesheet" href="${quoted(at('page.css'))}">
<title>${quoted(vscode.l10n.t('Proof'))}</title>
</head>
<body data-worker="${quoted(at('worker.js'))}">
<script nonce="${nonce}" src="${quoted(at('page.js'))}"></script>
</body>
</html>`;
}

function quoted(text: string): string {
  return text.replace(/[&<>"']/g, (character) => `&#${character.charCodeAt(0)};`);
}
