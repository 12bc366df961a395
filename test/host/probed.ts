import { existsSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { top } from '../house/tree.ts';
import { PATIENCE_MS } from './patience.ts';
import type { HostRest } from './probe/main.ts';
import { type Host, startHost } from './server.ts';
import { packProbe, packVsix } from './vsix.ts';

/** A host whose extension host answers what it takes. */
export interface ProbedHost extends Host {
  /** The packed extension's file. */
  readonly vsix: string;
  ask<K extends keyof Answers>(question: K, about?: string): Promise<Answers[K]>;
  /** Before the extension host is started anew. */
  forget(): void;
}

interface Answers {
  readonly activate: number | null;
  readonly rest: HostRest;
  readonly open: null;
  readonly close: null;
}

export async function startProbedHost(): Promise<ProbedHost> {
  const made = join(top, 'dist', 'test', 'host');
  const port = join(made, `probe.${process.pid}.port`);
  const vsix = await packVsix(made);
  const others = [await packProbe(made)];
  const host = await startHost({ vsix, others, trust: 'everything', env: { PROBE_PORT: port } });
  const forget = () => rmSync(port, { force: true });
  return {
    ...host,
    vsix,
    forget,
    async ask(question, about = '') {
      await until(() => existsSync(port) && readFileSync(port, 'utf8') !== '');
      const address = `http://127.0.0.1:${readFileSync(port, 'utf8')}/${question}?about=${encodeURIComponent(about)}`;
      const said = (await (await fetch(address)).json()) as { answer: never; failure?: string };
      if (said.failure !== undefined) throw new Error(`${question}: ${said.failure}`);
      return said.answer;
    },
    async stop() {
      await host.stop();
      forget();
    },
  };
}

async function until(isSo: () => boolean): Promise<void> {
  const late = Date.now() + PATIENCE_MS;
  while (!isSo()) {
    if (Date.now() > late) throw new Error('The extension host did not start');
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}
