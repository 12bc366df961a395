import { type ChildProcess, spawn } from 'node:child_process';
import { mkdirSync, mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { PATIENCE_MS } from './patience.ts';
import { run } from './process.ts';
import { serverFiles } from './server-files.ts';

/** A server with its workbench, ready for a browser. It listens on this machine alone. */
export interface Host {
  readonly port: number;
  /** A folder that goes with the host: short, since sockets lie in it. */
  readonly folder: string;
  /** The workbench's address with a folder opened. */
  url(folder: string, payload?: readonly (readonly [string, string])[]): string;
  /** Where the VSIX was installed. */
  extension(): string;
  /** A file as the workbench calls it. */
  remote(file: string): string;
  stop(): Promise<void>;
}

export interface HostOptions {
  /** Installed before the start. */
  readonly vsix: string;
  /** Others to install, which the tests need. */
  readonly others?: readonly string[];
  readonly settings?: Readonly<Record<string, unknown>>;
  /** Variables for the extension host. */
  readonly env?: Readonly<Record<string, string>>;
  /** Whether folders are trusted unasked. */
  readonly trust: 'everything' | 'asked';
  /** What it is for; a workbench that is driven by hand where it is left out. */
  readonly runs?: 'workbench' | 'extension tests';
}

const STOP_MS = 5_000;

const QUIET_SETTINGS = {
  'workbench.startupEditor': 'none',
  'workbench.enableExperiments': false,
  'workbench.tips.enabled': false,
  'workbench.editor.useModal': 'off',
  'workbench.secondarySideBar.defaultVisibility': 'hidden',
  'chat.disableAIFeatures': true,
  'workbench.colorTheme': 'Default Dark Modern',
  'extensions.autoCheckUpdates': false,
  'extensions.autoUpdate': false,
  'extensions.ignoreRecommendations': true,
  'telemetry.telemetryLevel': 'off',
  'git.autofetch': false,
  'files.autoSave': 'off',
};

export async function startHost({
  vsix,
  others = [],
  settings = {},
  env: more = {},
  trust,
  runs = 'workbench',
}: HostOptions): Promise<Host> {
  const { main, node, testOptions } = await serverFiles();
  const folder = mkdtempSync(join(tmpdir(), 'sph-'));
  const made = (name: string): string => {
    mkdirSync(join(folder, name), { recursive: true });
    return join(folder, name);
  };
  const [data, extensions, temporary, cache] = ['data', 'exts', 't', 'cache'].map(made);
  writeFileSync(join(made('data/User'), 'settings.json'), JSON.stringify({ ...QUIET_SETTINGS, ...settings }));
  // The server names its machine in a cache folder; nothing of it is to stay.
  const env = { ...cleanEnvironment(), TMPDIR: temporary, XDG_CACHE_HOME: cache, ...more };
  const folders = ['--server-data-dir', data, '--user-data-dir', data, '--extensions-dir', extensions];
  const common = [main, ...folders, '--accept-server-license-terms'];
  const installs = [vsix, ...others].flatMap((each) => ['--install-extension', each]);
  await run(node, [...common, ...installs, '--force'], folder, env);
  const port = await freePort();
  const options = [
    '--host',
    '127.0.0.1',
    '--port',
    String(port),
    '--without-connection-token',
    '--telemetry-level',
    'off',
  ];
  if (trust === 'everything') options.push('--disable-workspace-trust');
  if (runs === 'extension tests') options.push(...testOptions);
  // A process group of its own: one signal reaches the extension host and the watchers too.
  const child = spawn(node, [...common, ...options], {
    env,
    stdio: ['ignore', 'pipe', 'pipe'],
    detached: true,
  });
  const end = () => endGroup(child, 'SIGKILL');
  process.once('exit', end);
  await listening(child);
  const authority = `w.localhost:${port}`;

  return {
    port,
    folder,
    extension() {
      const name = readdirSync(extensions).find((each) => each.startsWith('sizeproof.'));
      if (name === undefined) throw new Error('Expected the extension among those installed');
      return join(extensions, name);
    },
    remote: (file) => `vscode-remote://${authority}${file}`,
    url: (opened, payload = []) => {
      const all = JSON.stringify([['skipWelcome', 'true'], ['skipReleaseNotes', 'true'], ...payload]);
      return `http://${authority}/?folder=${encodeURIComponent(opened)}&payload=${encodeURIComponent(all)}`;
    },
    async stop() {
      const gone = child.exitCode !== null ? null : new Promise((resolve) => child.once('exit', resolve));
      endGroup(child, 'SIGTERM');
      const timer = setTimeout(end, STOP_MS);
      await gone;
      clearTimeout(timer);
      end();
      process.off('exit', end);
      rmSync(folder, { recursive: true, force: true, maxRetries: 10 });
    },
  };
}

/** Without what an editor or an earlier host left in it, which would change what the server does. */
function cleanEnvironment(): NodeJS.ProcessEnv {
  const strange = /^(VSCODE_|CODE_SERVER_|ELECTRON_|VITEST|NODE_OPTIONS$|NODE_ENV$|XDG_RUNTIME_DIR$)/;
  return Object.fromEntries(Object.entries(process.env).filter(([name]) => !strange.test(name)));
}

function endGroup(child: ChildProcess, signal: NodeJS.Signals): void {
  if (child.pid === undefined) return;
  try {
    process.kill(-child.pid, signal);
  } catch (error) {
    // It is gone already.
    if ((error as NodeJS.ErrnoException).code !== 'ESRCH') throw error;
  }
}

function listening(child: ChildProcess): Promise<void> {
  return new Promise((resolve, reject) => {
    let printed = '';
    const timer = setTimeout(() => reject(new Error(`The server did not start:\n${printed}`)), PATIENCE_MS);
    const take = (data: Buffer) => {
      printed += data;
      if (!printed.includes('Extension host agent listening')) return;
      clearTimeout(timer);
      resolve();
    };
    child.stdout?.on('data', take);
    child.stderr?.on('data', take);
    child.once('exit', (code) => {
      clearTimeout(timer);
      reject(new Error(`The server ended with exit code ${code}:\n${printed}`));
    });
  });
}

function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const address = probe.address();
      const port = typeof address === 'object' && address !== null ? address.port : 0;
      probe.close(() => resolve(port));
    });
  });
}
