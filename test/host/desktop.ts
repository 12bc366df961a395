import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { downloadAndUnzipVSCode, runTests } from '@vscode/test-electron';
import { build } from 'esbuild';
import { top } from '../house/tree.ts';
import type { Outcome } from './suite/runner.ts';
import { makeWorkspace } from './workspace.ts';

// The extension tests in a desktop VS Code, which is downloaded; where it cannot be, nothing is tested, and that is said.
const folder = mkdtempSync(join(tmpdir(), 'spd-'));
try {
  process.exitCode = await testDesktop();
} finally {
  rmSync(folder, { recursive: true, force: true });
}

async function testDesktop(): Promise<number> {
  const program = await downloadAndUnzipVSCode().catch((error: unknown) => {
    console.error(`VS Code could not be downloaded, so nothing was tested: ${error}`);
    return null;
  });
  if (program === null) return 1;
  const [suite, outcomes] = [join(folder, 'suite.cjs'), join(folder, 'outcomes.json')];
  await build({
    entryPoints: [join(top, 'test', 'host', 'suite', 'main.ts')],
    outfile: suite,
    bundle: true,
    platform: 'node',
    format: 'cjs',
    external: ['vscode'],
  });
  await runTests({
    vscodeExecutablePath: program,
    extensionDevelopmentPath: top,
    extensionTestsPath: suite,
    launchArgs: [makeWorkspace(join(folder, 'ws')), '--disable-workspace-trust'],
    extensionTestsEnv: { SIZEPROOF_OUTCOMES: outcomes },
    // Each test says below how it went.
  }).catch(() => undefined);
  const found: Outcome[] = existsSync(outcomes) ? JSON.parse(readFileSync(outcomes, 'utf8')) : [];
  const failed = found.filter((each) => each.failure !== null);
  for (const { name, failure } of failed) console.error(`${name}\n${failure}`);
  console.log(`${found.length - failed.length} passed, ${failed.length} failed`);
  return found.length === 0 || failed.length > 0 ? 1 : 0;
}
