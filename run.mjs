// Starter: `npm start`, `npm test` and the rest come through here. Written in ES2018 and importing nothing before the
// version check, so that an old Node gets as far as saying that it is too old.

const OLDEST_NODE_MAJOR = 20;

/** What esbuild makes for Node, each one file. */
const BUNDLES = [
  { entry: 'extension/cli/main.ts', file: 'dist/cli.js', head: '#!/usr/bin/env node\n' },
  { entry: 'extension/node/pool.worker.ts', file: 'dist/pool.worker.js', head: '' },
  // CommonJS, which every host loads; what is made beside it are ES modules, hence the ending.
  { entry: 'extension/main.ts', file: 'dist/extension.cjs', head: '' },
];

/** What esbuild makes for the page; a stylesheet comes out beside the script that imports it. */
const PAGE_BUNDLES = [
  { entry: 'webview/page/page.ts', file: 'dist/page/page.js' },
  { entry: 'webview/worker/worker.ts', file: 'dist/page/worker.js' },
];

/** VS Code 1.100, the oldest that the extension supports, is built on Chromium 132. */
const FOR_BROWSERS = { platform: 'browser', target: 'chrome132', minify: true };

/** The extension for a host in a browser, in CommonJS: the oldest one loads nothing that does not end in `.js`, and newer ones take that for an
 *  ES module where the manifest says `"type": "module"`. So the manifest does not, and dist/package.json says it to Node. */
const WEB_BUNDLE = { entry: 'extension/main.web.ts', file: 'dist/extension.web.js' };

/** The SIMD engine's kernels, compiled; the bundles read it where it lies beside them. */
const KERNELS = 'dist/engine.wasm';

/** Memory is the host's, nothing is allocated by the kernels, and no check is left in them. */
const KERNEL_FLAGS = [
  ...['-O3', '--noAssert', '--uncheckedBehavior', 'always', '--runtime', 'stub', '--importMemory'],
  ...['--enable', 'simd', '--enable', 'bulk-memory'],
];

/** What the benchmark runs: the command line with its worker, itself, and what it runs in processes of their own. */
const BENCH_ENTRIES = [
  'extension/cli/main.ts',
  'extension/node/pool.worker.ts',
  'test/bench/main.ts',
  'test/bench/cold-start.ts',
  'test/bench/peak.ts',
  'test/bench/page-speed.ts',
];

/** Rooms with a tsconfig of their own. */
const ROOMS = [
  'core',
  'core/simd/kernels',
  'extension/node',
  'extension/cli',
  'extension/app',
  'extension/web',
  'extension',
  'extension/tsconfig.web.json',
  'webview/worker',
  'webview/link',
  'webview/page',
  'test',
];

const PAGE_TESTS = 'test/page/vitest.config.ts';
const HOST_TESTS = 'test/host/vitest.config.ts';

/** Tests of the rooms, of the page alone in a browser, and of the whole in an editor. */
const ALL_TESTS = ['test/vitest.config.ts', PAGE_TESTS, HOST_TESTS];

const COMMANDS = { start, test, build, types, lint, mutate, paint, schema, kernels, pack, page, host, bench, desktop };

const nodeVersion = process.versions.node;
if (Number(nodeVersion.split('.')[0]) < OLDEST_NODE_MAJOR) {
  console.error(
    `Sizeproof needs Node ${OLDEST_NODE_MAJOR} or newer, and this is Node ${nodeVersion}. ` +
      'Install a newer Node (https://nodejs.org) and run the same command again.',
  );
  process.exitCode = 1;
} else {
  main(process.argv[2], process.argv.slice(3)).then(
    (code) => {
      process.exitCode = code;
    },
    (error) => {
      console.error(error instanceof Stop ? error.message : error);
      process.exitCode = 1;
    },
  );
}

async function main(name, rest) {
  const command = Object.hasOwn(COMMANDS, name) ? COMMANDS[name] : null;
  if (command === null) {
    const given = name === undefined ? 'no command was given' : `there is no command "${name}"`;
    throw new Stop(`Expected one of ${Object.keys(COMMANDS).join(', ')}, but ${given}.`);
  }
  const { fileURLToPath } = await import('node:url');
  process.chdir(fileURLToPath(new URL('.', import.meta.url)));
  return command(rest);
}

async function start() {
  await build();
  const code = await run(['dist/cli.js', 'build', 'test/demo', '--out', 'dist/demo']);
  if (code === 0) {
    console.log(`
The demo's textures are in test/demo (its settings: test/demo/sizeproof.json), what was built from them is in dist/demo.
Now a folder of your own:

  node dist/cli.js init FOLDER               writes a sizeproof.json to start from
  node dist/cli.js build PATH --out DIR      builds every texture below PATH into DIR
  node dist/cli.js check PATH --out DIR      says whether what is in DIR is still what PATH asks for
  node dist/cli.js proof FILE --html F.html  shows one texture at every size and by other kernels
  node dist/cli.js review                    says what changed in textures since the last commit
  node dist/cli.js --help                    the rest`);
  }
  return code;
}

async function test(rest) {
  if (process.env.SKIP_HOST === '1' && process.env.CI)
    throw new Stop('SKIP_HOST is refused where CI is set: the tests in a browser and in an editor must run.');
  await types();
  await lint();
  await bundle();
  // A filter is meant for the first.
  return countTests(rest.length === 0 ? ALL_TESTS : ALL_TESTS.slice(0, 1), rest);
}

/** Runs the tests of one configuration and answers how many passed, failed and were skipped, and vitest's exit code. */
async function runTests(config, rest) {
  const { existsSync, readFileSync, rmSync } = await import('node:fs');
  const { resolve } = await import('node:path');
  // Absolute, since vitest's own root is the room of the configuration.
  const results = resolve('dist/test-results.json');
  rmSync(results, { force: true });
  const code = await run([
    'node_modules/vitest/vitest.mjs',
    'run',
    '--config',
    config,
    '--reporter=default',
    '--reporter=json',
    `--outputFile.json=${results}`,
    ...rest,
  ]);
  if (!existsSync(results)) throw new Stop(`The tests ended without a report, with exit code ${code}.`);
  const report = JSON.parse(readFileSync(results, 'utf8'));
  // A file that could not be loaded or made ready has no test that failed, and is a failure all the same.
  const unready = report.testResults.filter(
    ({ status, assertionResults }) => status === 'failed' && assertionResults.every((each) => each.status !== 'failed'),
  );
  const failed = report.numFailedTests + unready.length;
  return { passed: report.numPassedTests, failed, skipped: report.numPendingTests, code };
}

async function build() {
  await install('.');
  await bundle();
  return 0;
}

async function types() {
  await install('.');
  await install('test');
  for (const room of ROOMS) {
    await step(`Types of ${room}`, ['node_modules/typescript/bin/tsc', '-p', room]);
  }
  return 0;
}

async function lint() {
  await install('test');
  await step('Lint', ['test/node_modules/@biomejs/biome/bin/biome', 'check']);
  return 0;
}

async function mutate(rest) {
  await install('.');
  await install('test');
  return run(['test/mutate/mutate.mjs', ...rest]);
}

/** The tests of the page alone, which need a browser and minutes. */
async function page(rest) {
  await install('.');
  await install('test');
  await bundle();
  return countTests([PAGE_TESTS], rest);
}

/** In a real VS Code, with what was packed. */
async function host(rest) {
  await install('.');
  await install('test');
  await bundle();
  return countTests([HOST_TESTS], rest);
}

/** Measures what README and test/bench/RESULTS.md say of speed; `--smoke` only sees that all of it runs. */
async function bench(rest) {
  await install('.');
  await install('test');
  await kernels();
  const { copyFileSync, mkdirSync, rmSync } = await import('node:fs');
  // Bundles of its own: others may be reading those that ship.
  const folder = rest.includes('--smoke') ? `dist/bench/smoke.${process.pid}` : 'dist/bench/whole';
  mkdirSync(folder, { recursive: true });
  try {
    for (const entry of BENCH_ENTRIES) {
      const file = `${folder}/${entry.slice(entry.lastIndexOf('/') + 1).replace(/\.ts$/, '.js')}`;
      await bundleOne({
        entry,
        file: file.replace(/main\.js$/, entry.includes('cli') ? 'cli.js' : 'main.js'),
        head: '',
      });
    }
    copyFileSync(KERNELS, `${folder}/engine.wasm`);
    for (const { entry, file } of PAGE_BUNDLES) await bundleForPage({ entry, file: file.replace('dist', folder) });
    return await run([`${folder}/main.js`, ...rest]);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** The extension tests in a desktop VS Code, which must be downloaded; no part of `npm test`. */
async function desktop() {
  await install('test');
  await build();
  return runSource('test/host/desktop.ts', []);
}

/** Runs sets of tests, one after another; the last line counts them all. */
async function countTests(configs, rest) {
  const reports = [];
  for (const config of configs) reports.push(await runTests(config, rest));
  const count = (name) => reports.reduce((sum, each) => sum + each[name], 0);
  if (count('passed') + count('failed') + count('skipped') === 0)
    throw new Stop('Expected tests, but there were none.');
  if (count('skipped') > 0) console.log(`${count('skipped')} skipped`);
  console.log(`${count('passed')} passed, ${count('failed')} failed`);
  return count('failed') > 0 ? 1 : Math.max(...reports.map((each) => each.code));
}

function paint(rest) {
  return runSource('test/demo/paint/paint.ts', rest);
}

function schema(rest) {
  return runSource('test/house/schema.ts', rest);
}

/** Packs the extension, for `Install from VSIX` of an editor. */
async function pack() {
  await install('test');
  await build();
  const options = ['--no-dependencies', '--allow-missing-repository', '--no-rewrite-relative-links'];
  return run(['test/node_modules/@vscode/vsce/vsce', 'package', ...options, '--out', 'dist/sizeproof.vsix']);
}

/** Bundles one TypeScript program of the test room into dist/ and runs it from the top of the tree. */
async function runSource(entry, rest) {
  await install('.');
  const { basename } = await import('node:path');
  const file = `dist/house/${basename(entry, '.ts')}.js`;
  await bundleOne({ entry, file, head: '' });
  return run([file, ...rest]);
}

/** Compiles core/simd/kernels, AssemblyScript, to one WebAssembly module, unless it came from these very sources. */
async function kernels() {
  await install('.');
  const { createHash } = await import('node:crypto');
  const { existsSync, mkdirSync, readdirSync, readFileSync, renameSync, writeFileSync } = await import('node:fs');
  const folder = 'core/simd/kernels';
  const sources = readdirSync(folder)
    .filter((name) => name.endsWith('.ts'))
    .map((name) => `${folder}/${name}`);
  const hash = createHash('sha256').update(readFileSync('package-lock.json')).update(KERNEL_FLAGS.join(' '));
  for (const source of sources) hash.update(readFileSync(source));
  const stamp = `${hash.digest('hex')}\n`;
  const stampFile = 'dist/house/engine.compiled-from';
  if (existsSync(KERNELS) && existsSync(stampFile) && readFileSync(stampFile, 'utf8') === stamp) return 0;
  mkdirSync('dist/house', { recursive: true });
  // Others may be reading the former one.
  const made = `${KERNELS}.${process.pid}`;
  const code = await run(['node_modules/assemblyscript/bin/asc.js', ...sources, '-o', made, ...KERNEL_FLAGS]);
  if (code !== 0) throw new Stop(`${folder} could not be compiled.`);
  renameSync(made, KERNELS);
  writeFileSync(stampFile, stamp);
  return 0;
}

async function bundle() {
  await kernels();
  const { chmodSync } = await import('node:fs');
  for (const each of BUNDLES) {
    await bundleOne(each);
    if (each.head !== '') chmodSync(each.file, 0o755);
  }
  const code = await runSource('test/house/contributions.ts', []);
  if (code !== 0) throw new Stop(`What package.json refers to could not be written: exit code ${code}.`);
  for (const each of PAGE_BUNDLES) await bundleForPage(each);
  await runEsbuild(WEB_BUNDLE.entry, {
    ...FOR_BROWSERS,
    outfile: WEB_BUNDLE.file,
    format: 'cjs',
    external: ['vscode'],
    mainFields: ['module', 'main'],
  });
}

async function bundleOne({ entry, file, head }) {
  const { mkdirSync, writeFileSync } = await import('node:fs');
  mkdirSync('dist', { recursive: true });
  writeFileSync('dist/package.json', '{ "type": "module" }\n');
  const isModule = file.endsWith('.js');
  return runEsbuild(entry, {
    outfile: file,
    platform: 'node',
    target: 'node20',
    format: isModule ? 'esm' : 'cjs',
    // What only programs of the test room import, which run where it is installed.
    external: isModule ? ['esbuild', 'typescript', '@vscode/test-electron'] : ['vscode'],
    minify: !isModule,
    // jsonc-parser's `main` hides its parts from a bundler; its `module` does not.
    mainFields: ['module', 'main'],
    // Dependencies in CommonJS call `require` for Node's own modules, which an ES module does not have.
    banner: isModule
      ? {
          js: `${head}import { createRequire as createRequireHere } from 'node:module';\nconst require = createRequireHere(import.meta.url);`,
        }
      : {},
  });
}

function bundleForPage({ entry, file }) {
  return runEsbuild(entry, { ...FOR_BROWSERS, outfile: file, format: 'iife', loader: { '.wasm': 'binary' } });
}

async function runEsbuild(entry, options) {
  const esbuild = await import('esbuild');
  try {
    await esbuild.build({ entryPoints: [entry], bundle: true, legalComments: 'eof', ...options });
  } catch (error) {
    if (!Array.isArray(error.errors)) throw error;
    // esbuild has printed what is wrong and where.
    throw new Stop(`${entry} could not be bundled.`);
  }
}

/** `npm ci` in a folder, unless its node_modules came from this very lock file on this kind of machine. */
async function install(folder) {
  const { createHash } = await import('node:crypto');
  const { existsSync, readFileSync, writeFileSync } = await import('node:fs');
  const stampFile = `${folder}/node_modules/.installed-from`;
  const lock = createHash('sha256').update(readFileSync(`${folder}/package-lock.json`));
  const stamp = `${lock.digest('hex')} ${process.platform} ${process.arch}\n`;
  if (existsSync(stampFile) && readFileSync(stampFile, 'utf8') === stamp) return;
  const what = folder === '.' ? 'what compiles and ships' : 'what only the tests need';
  console.log(`Installing ${what} ...`);
  // Development dependencies are asked for by name: NODE_ENV=production would leave them out.
  const code = await run([await findNpm(), 'ci', '--include=dev', '--loglevel=error'], folder);
  if (code !== 0)
    throw new Stop(`npm ci failed in ${folder === '.' ? 'the top folder' : folder} with exit code ${code}.`);
  writeFileSync(stampFile, stamp);
}

/** npm's own script, run by this Node: Windows has no `npm` that can be started without a shell. */
async function findNpm() {
  const { existsSync, realpathSync } = await import('node:fs');
  const { basename, delimiter, dirname, join } = await import('node:path');
  const given = process.env.npm_execpath;
  if (given !== undefined && basename(given) === 'npm-cli.js' && existsSync(given)) return given;
  const beside = join('node_modules', 'npm', 'bin', 'npm-cli.js');
  const folders = [
    dirname(process.execPath),
    ...(process.env.PATH || '').split(delimiter).filter((each) => each !== ''),
  ];
  for (const folder of folders) {
    for (const file of [join(folder, beside), join(folder, '..', 'lib', beside)]) {
      if (existsSync(file)) return file;
    }
    const link = join(folder, 'npm');
    if (existsSync(link) && basename(realpathSync(link)) === 'npm-cli.js') return realpathSync(link);
  }
  throw new Stop('npm was found neither beside this Node nor on the PATH. Install npm and run the same command again.');
}

async function step(title, args) {
  console.log(`${title} ...`);
  const code = await run(args);
  if (code !== 0) throw new Stop(`${title}: failed with exit code ${code}.`);
}

/** Runs a script by this Node and resolves to its exit code. */
async function run(args, folder = '.') {
  const { spawn } = await import('node:child_process');
  const { constants } = await import('node:os');
  // Ctrl-C reaches the child as well; it must be able to tidy up before this process is gone.
  const wait = () => undefined;
  process.on('SIGINT', wait);
  try {
    return await new Promise((resolve, reject) => {
      const child = spawn(process.execPath, args, { cwd: folder, stdio: 'inherit' });
      child.on('error', reject);
      child.on('close', (code, signal) => resolve(code === null ? 128 + constants.signals[signal] : code));
    });
  } finally {
    process.removeListener('SIGINT', wait);
  }
}

/** Ends the run with a sentence in place of a stack trace. */
function Stop(message) {
  this.message = message;
}
