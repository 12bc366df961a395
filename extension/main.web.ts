import type * as vscode from 'vscode';
import { activateApp } from './app/activate.ts';
import { webPorts } from './web/ports.ts';
import { drawSheet } from './web/sheet.ts';
import { after, encodeUtf8, randomText } from './web/surroundings.ts';

/** The extension in a browser: no disk, so nothing is built or checked; proofs, explanations and settings work on whatever file
 *  systems the editor has. */
export function activate(context: vscode.ExtensionContext): void {
  activateApp(context, {
    ports: webPorts,
    disk: null,
    review: null,
    startBench: null,
    drawSheet,
    newNonce: () => randomText(16),
    encodeUtf8,
    after,
  });
}
