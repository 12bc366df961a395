import { existsSync, readdirSync, readFileSync, symlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { PNG } from 'pngjs';
import { describe, expect, test } from 'vitest';
import { encodePng } from '../../core/codec/png/encode.ts';
import { proofPage } from '../../core/export/proof-page.ts';
import { makeSheet } from '../../core/export/sheet.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { demoOrder, goOn, ports } from '../export/orders.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { top } from '../house/tree.ts';
import { newFolder } from '../node/folder.ts';
import { sizeproof } from './cli.ts';

/** A folder with the demo's settings and one of its textures. */
function projectWith(path: string): string {
  const read = (name: string) => readFileSync(join(top, 'test/demo', name));
  return newFolder({ [path]: read(path), 'sizeproof.json': read('sizeproof.json') });
}

describe('sizeproof proof', () => {
  test('writes the very bytes that core makes, into a folder that it makes', async () => {
    const folder = projectWith('ui/lantern.png');
    const ran = await sizeproof(['proof', 'ui/lantern.png', '--sheet', 'out/l.png', '--html', 'out/l.html'], {
      folder,
    });
    expect({ code: ran.code, stderr: ran.stderr }).toEqual({ code: 0, stderr: '' });
    expect(ran.stdout).toMatch(/^wrote out\/l\.png \([\d.]+ KiB\)\nwrote out\/l\.html \([\d.]+ KiB\)\n$/);
    expect(readdirSync(join(folder, 'out')).sort()).toEqual(['l.html', 'l.png']);
    const order = orderIn(folder);
    const sheet = await makeSheet(order, ports, goOn);
    expect(readFileSync(join(folder, 'out/l.png')).equals(Buffer.from(sheet.png))).toBe(true);
    const at = (name: string) => readFileSync(join(top, 'dist/page', name), 'utf8');
    const code = { script: at('page.js'), worker: at('worker.js'), style: at('page.css') };
    const page = proofPage(order, { code, language: 'en', words: {} }, newHash);
    expect(readFileSync(join(folder, 'out/l.html'), 'utf8')).toBe(page);
    expect(page).not.toContain(folder);
  });

  test('compares the kernels that it is given, where it is told to', async () => {
    const folder = projectWith('ui/lantern.png');
    const words = [
      'proof',
      'ui/lantern.png',
      '--sheet',
      'l.png',
      '--kernels',
      'box,nearest',
      '--at',
      'badge',
      '--json',
    ];
    const ran = await sizeproof(words, { folder });
    expect(ran.code).toBe(0);
    expect(JSON.parse(ran.stdout)).toMatchObject({
      command: 'proof',
      textures: [{ source: 'ui/lantern.png', sheet: 'l.png', html: null }],
    });
    const { kernels, at } = { kernels: ['box', 'nearest'].map((name) => ({ name, params: {} })), at: 'badge' };
    const state = {
      version: 1,
      sight: { kind: 'target', name: at },
      typed: [],
      slots: [{ id: 0, kernel: null, change: {} }, ...kernels.map((kernel, i) => ({ id: i + 1, kernel, change: {} }))],
      selected: 0,
    };
    const sheet = await makeSheet({ ...orderIn(folder), state }, ports, goOn);
    expect(readFileSync(join(folder, 'l.png')).equals(Buffer.from(sheet.png))).toBe(true);
    expect(PNG.sync.read(readFileSync(join(folder, 'l.png'))).width).toBe(1440);
  });

  test.each([
    [['ui/lantern.png'], 2, 'proof-nowhere'],
    [['ui/lantern.png', 'b.png', '--sheet', 's.png'], 2, 'option-value'],
    [['ui/lantern.png', '--sheet', 's.png', '--kernels', 'box,magic'], 2, 'option-value'],
    [['ui/lantern.png', '--html', 's.html', '--keep', 'some'], 2, 'option-value'],
    [['ui/lantern.png', '--sheet', 's.png', '--at', 'hedge'], 2, 'no-such-target'],
    [['nothing', '--sheet', 's.png'], 2, 'nothing-selected'],
    [['.', '--sheet', 's.png'], 2, 'one-texture'],
    [['ui/lantern.png', '--sheet', 'link.png'], 4, 'output-is-source'],
    [['damaged.png', '--sheet', 's.png', '--html', 's.html'], 3, 'png-file-truncated'],
    [['pointer.png', '--html', 's.html'], 3, 'not-downloaded'],
  ])('%j is refused with exit code %d: %s', async (words, code, problem) => {
    const folder = projectWith('ui/lantern.png');
    writeFileSync(join(folder, 'damaged.png'), readFileSync(join(folder, 'ui/lantern.png')).subarray(0, 99));
    writeFileSync(
      join(folder, 'pointer.png'),
      `version https://git-lfs.github.com/spec/v1\noid sha256:${'0'.repeat(64)}\nsize 45\n`,
    );
    symlinkSync(join(folder, 'ui/lantern.png'), join(folder, 'link.png'));
    const ran = await sizeproof(['proof', ...words], { folder });
    expect({ code: ran.code, line: ran.stderr.trim() }).toEqual({
      code,
      line: expect.stringMatching(new RegExp(`^[^\\n]*: error ${problem}: [^\\n]*$`)),
    });
    expect(['s.png', 's.html'].filter((name) => existsSync(join(folder, name)))).toEqual([]);
    expect(
      readFileSync(join(folder, 'ui/lantern.png')).equals(readFileSync(join(top, 'test/demo/ui/lantern.png'))),
    ).toBe(true);
  });

  test('of more than 50 MB asks what to keep, and keeps it', async () => {
    const raster = noiseRaster(1, { width: 5200, height: 3300 }, 3, 8, 'noise');
    const folder = newFolder({ 'large.png': await encodePng(raster, deflate) });
    const asked = await sizeproof(['proof', 'large.png', '--html', 'l.html'], { folder });
    expect(asked.code).toBe(2);
    expect(asked.stderr).toMatch(/error export-too-large: .*`--keep all`, or `--keep middle`/);
    expect(existsSync(join(folder, 'l.html'))).toBe(false);
    const middle = await sizeproof(['proof', 'large.png', '--html', 'l.html', '--keep', 'middle'], { folder });
    expect(middle.code).toBe(0);
    const page = readFileSync(join(folder, 'l.html'), 'utf8');
    expect(page.length).toBeLessThan(30e6);
    expect(page).toContain('Only the middle 2048×2048 of 5200×3300 texels is in this page');
  }, 120_000);
});

/** What core would be asked for by this folder's settings. */
function orderIn(folder: string) {
  const { settings } = parseSettings(
    readFileSync(join(folder, 'sizeproof.json'), 'utf8'),
    join(folder, 'sizeproof.json'),
  );
  const { treatment, origins } = resolveTreatment(settings, 'ui/lantern.png');
  return demoOrder('ui/lantern.png', { settings: { file: 'sizeproof.json', globs: ['ui/**'], treatment, origins } });
}
