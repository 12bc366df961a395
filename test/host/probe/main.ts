import { readdirSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:http';
import type { AddressInfo } from 'node:net';
import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import * as vscode from 'vscode';

/** What the extension host that this runs in takes, once its garbage is collected. */
export interface HostRest {
  /** Of the process, workers included; 0 where the system does not tell. */
  readonly threads: number;
  /** Bytes of JavaScript's heap, and of buffers beside it. */
  readonly heap: number;
  readonly buffers: number;
}

/** Answers questions of a test on 127.0.0.1, at the port that it writes to the file PROBE_PORT. */
export function activate(context: vscode.ExtensionContext): void {
  const questions: Readonly<Record<string, (argument: string) => Promise<unknown>>> = {
    /** Milliseconds in which an extension is loaded and activated; null where it is active already. */
    async activate(id) {
      const extension = vscode.extensions.getExtension(id);
      if (extension === undefined) throw new Error(`Expected the extension ${id}`);
      if (extension.isActive) return null;
      const start = performance.now();
      await extension.activate();
      return performance.now() - start;
    },
    rest,
    async open(path) {
      await vscode.commands.executeCommand('vscode.openWith', vscode.Uri.file(path), 'sizeproof.proof');
    },
    async close() {
      await vscode.commands.executeCommand('workbench.action.closeAllEditors');
    },
  };
  const server = createServer(async (request, response) => {
    const { pathname, searchParams } = new URL(request.url ?? '/', 'http://127.0.0.1');
    try {
      const answer = await questions[pathname.slice(1)](searchParams.get('about') ?? '');
      response.end(JSON.stringify({ answer: answer ?? null }));
    } catch (error) {
      response.end(JSON.stringify({ failure: String(error) }));
    }
  });
  server.listen(0, '127.0.0.1', () => {
    writeFileSync(process.env.PROBE_PORT as string, String((server.address() as AddressInfo).port));
  });
  context.subscriptions.push({ dispose: () => server.close() });
}

async function rest(): Promise<HostRest> {
  setFlagsFromString('--expose-gc');
  const collect = runInNewContext('gc') as () => void;
  // What the first round lets go of may hold more, which the second finds.
  for (let i = 0; i < 2; i++) {
    collect();
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  const { heapUsed, external } = process.memoryUsage();
  const threads = process.platform === 'linux' ? readdirSync('/proc/self/task').length : 0;
  return { threads, heap: heapUsed, buffers: external };
}
