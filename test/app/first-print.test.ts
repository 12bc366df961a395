import { pathToFileURL } from 'node:url';
import { afterEach, beforeAll, expect, test } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import { FIRST_PRINT_BYTES } from '../../core/protocol.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import type { Platform } from '../../extension/app/platform.ts';
import type { TextureFacts } from '../../extension/app/proof/facts.ts';
import { FirstPrinter } from '../../extension/app/proof/first-print.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { startBenchWorker } from '../../extension/node/workers/bench-worker.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { treatment as makeTreatment } from '../fixtures/treatment.ts';
import { bundleOnce } from '../node/bundle.ts';

const treatment = makeTreatment();
const noise = noiseRaster(3, { width: 900, height: 700 }, 3, 8, 'noise');
let worker: URL;
let file: Uint8Array;
let running = 0;
let reported: unknown[] = [];

beforeAll(async () => {
  worker = pathToFileURL(`${await bundleOnce()}/pool.worker.js`);
  file = await encodePng(noise, deflate);
});
afterEach(() => {
  expect(reported).toEqual([]);
  reported = [];
});

function printerOf(bytes: Uint8Array): FirstPrinter {
  const texture: Partial<TextureFacts> = {
    name: 'noise.png',
    byteCount: async () => bytes.length,
    bytes: async () => bytes.slice().buffer as ArrayBuffer,
    settings: async () => ({ texture: { treatment, origins: [] } }) as never,
  };
  const platform: Partial<Platform> = {
    startBench() {
      const started = startBenchWorker(worker);
      running++;
      started.listen((message) => {
        if (message === null) running--;
      });
      return started;
    },
    after(milliseconds, act) {
      const timer = setTimeout(act, milliseconds);
      return { dispose: () => clearTimeout(timer) };
    },
  };
  return new FirstPrinter(texture as TextureFacts, platform as Platform, (error) => reported.push(error));
}

const codesOf = (level: number) => (buildChain(noise, treatment).images[level].raster as StraightRaster).codes;

test('a first print is the build’s level, and its worker goes', async () => {
  const printer = printerOf(file);
  printer.begin();
  const [one, other] = await Promise.all([
    printer.print({ level: null, target: null }),
    printer.print({ level: null, target: null }),
  ]);
  // 900 halved until 128 are enough.
  expect(one?.image).toEqual({ level: 3 });
  expect(Buffer.from(one!.picture.codes).equals(Buffer.from(codesOf(3)))).toBe(true);
  expect(other).toEqual(one);
  await expect.poll(() => running).toBe(0);
});

test('a print that would be too much to move is a coarser level', async () => {
  const print = await printerOf(file).print({ level: 0, target: null });
  expect(900 * 700 * 4).toBeGreaterThan(FIRST_PRINT_BYTES);
  expect(print?.image).toEqual({ level: 1 });
  expect(Buffer.from(print!.picture.codes).equals(Buffer.from(codesOf(1)))).toBe(true);
  await expect.poll(() => running).toBe(0);
});

test('a damaged file has none, and its worker goes', async () => {
  expect(await printerOf(file.subarray(0, 5000)).print({ level: null, target: null })).toBe(null);
  await expect.poll(() => running).toBe(0);
});

test('a proof that is closed meanwhile leaves no worker and no question', async () => {
  const printer = printerOf(file);
  printer.begin();
  const asked = printer.print({ level: 2, target: null });
  printer.forget();
  expect(await asked).toBe(null);
  await expect.poll(() => running).toBe(0);
});
