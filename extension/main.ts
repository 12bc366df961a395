import { randomBytes } from 'node:crypto';
import { pathToFileURL } from 'node:url';
import * as vscode from 'vscode';
import { activateApp } from './app/activate.ts';
import { openDoor } from './node/door.ts';
import { nodePorts } from './node/ports/ports.ts';
import { openReviewDoor } from './node/review/door.ts';
import { startBenchWorker } from './node/workers/bench-worker.ts';
import { drawSheetInThread } from './node/workers/sheet.ts';

/** The extension on Node: on the desktop, or on the machine of a remote workspace. */
export function activate(context: vscode.ExtensionContext): void {
  const worker = vscode.Uri.joinPath(context.extensionUri, 'dist', 'pool.worker.js');
  activateApp(context, {
    ports: nodePorts,
    disk: openDoor(pathToFileURL(worker.fsPath)),
    review: openReviewDoor(pathToFileURL(worker.fsPath)),
    startBench: () => startBenchWorker(pathToFileURL(worker.fsPath)),
    drawSheet: (order, cancel) => drawSheetInThread(order, pathToFileURL(worker.fsPath), cancel),
    newNonce: () => randomBytes(16).toString('base64'),
    encodeUtf8: (text) => new TextEncoder().encode(text),
    after(milliseconds, act) {
      const timer = setTimeout(act, milliseconds);
      return { dispose: () => clearTimeout(timer) };
    },
  });
}
