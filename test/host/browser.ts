import { chmodSync, createReadStream, createWriteStream, existsSync, mkdirSync, rmSync } from 'node:fs';
import { createRequire } from 'node:module';
import { delimiter, join } from 'node:path';
import { pipeline } from 'node:stream/promises';
import { createBrotliDecompress } from 'node:zlib';
import type Playwright from 'playwright-core';
import type { Browser } from 'playwright-core';
import { cached } from './cache.ts';
import { type Pinned, unpackPackage } from './package.ts';
import { PATIENCE_MS } from './patience.ts';
import { run } from './process.ts';

// A bundle of this lies in dist; what only tests need is installed in the room of the tests.
const require = createRequire(join(process.cwd(), 'test/package.json'));

/** A Chromium that comes as a package, for machines without one. */
const CHROMIUM: Pinned = {
  name: '@sparticuz/chromium',
  version: '147.0.0',
  integrity: 'sha512-4ZKeAQQa8up2mt675qSitztLdbQrlf8BKdC5naeap+5Mv1OV1OlJdPoU+EJC/p5sQUJUQmN4r+q5+EhaaOUHpQ==',
};

/** Starts a browser: the one that the variable CHROMIUM names, else one that is installed, else the package's. It reaches this
 *  machine alone. `more` are arguments for Chromium. */
export async function launchBrowser(more: readonly string[] = []): Promise<Browser> {
  const { executablePath, env } = await findBrowser();
  const { chromium }: typeof Playwright = require('playwright-core');
  const browser = await chromium.launch({
    executablePath,
    env: { ...(process.env as Record<string, string>), ...env },
    headless: true,
    timeout: PATIENCE_MS,
    args: [
      // Containers of build servers have no user namespaces to make a sandbox of.
      '--no-sandbox',
      '--disable-gpu',
      '--disable-dev-shm-usage',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
      '--host-resolver-rules=MAP * ~NOTFOUND, EXCLUDE 127.0.0.1, EXCLUDE *.localhost',
      ...more,
    ],
  });
  browser.on('context', (context) => context.setDefaultTimeout(PATIENCE_MS));
  return browser;
}

interface Found {
  readonly executablePath: string;
  readonly env: Readonly<Record<string, string>>;
}

async function findBrowser(): Promise<Found> {
  const named = process.env.CHROMIUM;
  if (named !== undefined && named !== '') {
    if (!existsSync(named)) throw new Error(`Expected a browser for the variable CHROMIUM but received ${named}`);
    return { executablePath: named, env: {} };
  }
  const installed = INSTALLED.flatMap((name) =>
    name.includes('/') ? [name] : (process.env.PATH ?? '').split(delimiter).map((folder) => join(folder, name)),
  ).find((path) => existsSync(path));
  return installed === undefined ? packagedBrowser() : { executablePath: installed, env: {} };
}

const INSTALLED = [
  'google-chrome-stable',
  'google-chrome',
  'chromium',
  'chromium-browser',
  '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
  'C:/Program Files/Google/Chrome/Application/chrome.exe',
];

async function packagedBrowser(): Promise<Found> {
  if (process.platform !== 'linux' || process.arch !== 'x64') {
    throw new Error('No Chromium was found. Install Chrome or Chromium, or name one in the variable CHROMIUM.');
  }
  const folder = await cached(`chromium-${CHROMIUM.version}`, async (fresh) => {
    const packed = join(fresh, 'packed');
    mkdirSync(packed);
    await unpackPackage(CHROMIUM, 'bin', packed);
    await decompress(join(packed, 'chromium.br'), join(fresh, 'chromium'));
    chmodSync(join(fresh, 'chromium'), 0o755);
    for (const name of ['al2023', 'fonts', 'swiftshader']) {
      const tar = join(fresh, `${name}.tar`);
      await decompress(join(packed, `${name}.tar.br`), tar);
      await run('tar', ['xf', tar, '-C', fresh], fresh);
      rmSync(tar);
    }
    rmSync(packed, { recursive: true });
  });
  const libraries = [join(folder, 'lib'), ...(process.env.LD_LIBRARY_PATH ?? '').split(delimiter)];
  return {
    executablePath: join(folder, 'chromium'),
    env: {
      // What a bare system lacks.
      LD_LIBRARY_PATH: libraries.filter((each) => each !== '').join(delimiter),
      FONTCONFIG_PATH: join(folder, 'fonts'),
    },
  };
}

async function decompress(from: string, to: string): Promise<void> {
  await pipeline(createReadStream(from), createBrotliDecompress(), createWriteStream(to));
}
