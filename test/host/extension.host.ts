import { existsSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { build } from 'esbuild';
import { describe, expect, test } from 'vitest';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import { TEST_MS } from './patience.ts';
import { type Host, startHost } from './server.ts';
import { isLeftOut, namesOfTests } from './skip.ts';
import type { Outcome } from './suite/runner.ts';
import { packVsix } from './vsix.ts';
import { newPage } from './workbench.ts';
import { makeWorkspace } from './workspace.ts';

const outcomes = isLeftOut ? null : await runSuite();

// The tests ran in the extension host; here each says how it went.
describe('in the extension host', () => {
  if (outcomes === null) test.each(namesOfTests('suite'))('%s', () => undefined);
  else {
    test('tests ran, each that there is', () => {
      expect(outcomes.map((each) => each.name)).toEqual(namesOfTests('suite'));
    });
    test.each(outcomes.map(({ name, failure }) => [name, failure] as const))('%s', (_, failure) => {
      if (failure !== null) throw new Error(failure);
    });
  }
});

async function runSuite(): Promise<readonly Outcome[]> {
  const folder = join(top, 'dist', 'test', 'host');
  const vsix = await packVsix(folder);
  const file = join(folder, 'outcomes.json');
  rmSync(file, { force: true });
  const host = await startHost({
    vsix,
    trust: 'everything',
    runs: 'extension tests',
    env: { SIZEPROOF_OUTCOMES: file },
  });
  try {
    return await runIn(host, file);
  } finally {
    await host.stop();
  }
}

async function runIn(host: Host, file: string): Promise<readonly Outcome[]> {
  const suite = join(host.folder, 'suite.cjs');
  await build({
    entryPoints: [join(top, 'test', 'host', 'suite', 'main.ts')],
    outfile: suite,
    bundle: true,
    platform: 'node',
    format: 'cjs',
    external: ['vscode'],
  });
  const browser = await launchBrowser();
  try {
    const page = await newPage(browser, host);
    const said: string[] = [];
    await page.exposeFunction('codeAutomationLog', (_: string, words: unknown[]) => said.push(words.join(' ')));
    const ended = new Promise<number>((resolve) => {
      void page.exposeFunction('codeAutomationExit', resolve);
    });
    await page.goto(
      host.url(makeWorkspace(join(host.folder, 'ws')), [
        // What is packed is what is tested.
        ['extensionDevelopmentPath', host.remote(host.extension())],
        ['extensionTestsPath', host.remote(suite)],
      ]),
    );
    const late = new Promise<'late'>((resolve) => setTimeout(resolve, TEST_MS, 'late').unref());
    const code = await Promise.race([ended, late]);
    if (code === 'late') await page.screenshot({ path: join(top, 'dist', 'test', 'host', 'late.png') });
    if (!existsSync(file)) throw new Error(`No test ran (${code}):\n${said.join('\n')}`);
    return JSON.parse(readFileSync(file, 'utf8'));
  } finally {
    await browser.close();
  }
}
