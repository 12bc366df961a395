import { expect, test } from 'vitest';
import { notDownloaded, POINTER_BYTES } from '../../core/finding/not-downloaded.ts';
import { overBudget } from '../../core/finding/over-budget.ts';
import { stale } from '../../core/finding/stale.ts';
import { findings, judgeManifest } from '../../core/finding/table.ts';
import { thinning } from '../../core/finding/thinning.ts';
import type { Manifest, ManifestImage } from '../../core/manifest/manifest.ts';
import { say } from '../../core/problem.ts';
import { budgetFormats, gpuBytes, gpuFormats } from '../../core/raster/gpu-format.ts';
import type { Limits, Treatment } from '../../core/treatment/treatment.ts';
import { sampleManifest } from '../manifest/sample.ts';

const sample = sampleManifest();

/** A chain of a square power of two, with these coverages from level 0 on. */
function chain(side: number, coverages: readonly number[] = []): ManifestImage[] {
  const levels: ManifestImage[] = [];
  for (let level = 0, edge = side; ; level++, edge >>= 1) {
    const image = { use: 'image', level, extent: [edge, edge], pixels: sample.sources[0].pixels } as const;
    levels.push(coverages[level] === undefined ? image : { ...image, coverage: coverages[level] });
    if (edge === 1) return levels;
  }
}

function limited(limits: Partial<Limits>, levels: ManifestImage[], settings: Partial<Treatment> = {}): Manifest {
  return {
    ...sample,
    levels,
    settings: { ...sample.settings, ...settings, limits: { thinning: null, halo: null, overBudget: null, ...limits } },
  };
}

// A whole chain of side N = 2^k has (4 N^2 - 1) / 3 texels.
test.each([
  ['rgba8', 256, 4 * 87381],
  ['rgba16', 256, 8 * 87381],
  // 256..4 fill blocks: (4096 + 1024 + ... + 1) = 5461 of them; 2x2 and 1x1 take one each.
  ['bc7', 256, 16 * 5463],
  ['bc1', 256, 8 * 5463],
  // A single texel still takes a block: BC7 1x1 is 16 bytes.
  ['bc7', 1, 16],
  ['astc-12x12', 8, 16 * 4],
] as const)('a chain in %s from %i takes %i bytes', (format, side, bytes) => {
  expect(
    gpuBytes(
      chain(side).map((level) => level.extent),
      gpuFormats[format],
    ),
  ).toBe(bytes);
});

// Bits a texel as the trade's tables print them.
test.each([
  ['bc1', 4],
  ['bc4', 4],
  ['etc2-rgb', 4],
  ['eac-r11', 4],
  ['bc3', 8],
  ['bc5', 8],
  ['bc7', 8],
  ['etc2-rgba', 8],
  ['eac-rg11', 8],
  ['astc-4x4', 8],
  ['astc-5x5', 5.12],
  ['astc-6x6', 3.56],
  ['astc-8x8', 2],
  ['astc-10x10', 1.28],
  ['astc-12x12', 0.89],
] as const)('%s has %d bits a texel', (name, bits) => {
  const { width, height, bytes } = gpuFormats[name];
  expect(Math.round((bytes * 800) / (width * height)) / 100).toBe(bits);
});

test('the names of ASTC formats say their blocks', () => {
  for (const [name, format] of Object.entries(gpuFormats)) {
    if (name.startsWith('astc')) expect(name).toBe(`astc-${format.width}x${format.height}`);
  }
});

test('a chain is over its budget by one byte, and not at it', () => {
  const bytes = 16 * 5463;
  expect(overBudget(limited({ overBudget: { bytes, format: 'bc7' } }, chain(256)))).toBeNull();
  expect(overBudget(limited({ overBudget: { bytes: bytes - 1, format: 'bc7' } }, chain(256)))).toMatchObject({
    code: 'over-budget',
    severity: 'error',
    values: { bytes, format: 'bc7', budget: bytes - 1 },
  });
  expect(overBudget(limited({}, chain(256)))).toBeNull();
});

const { ktx2, normal } = sample.settings;

test.each<[string, number, number, Partial<Treatment>, number]>([
  ['color of four channels', 4, 8, {}, 4],
  ['RGB color, widened', 3, 8, {}, 4],
  ['RGB color, kept', 3, 8, { ktx2: { ...ktx2, format: 'same' } }, 3],
  ['16-bit color', 3, 16, {}, 8],
  ['gray data', 1, 8, { content: 'data' }, 1],
  ['a 16-bit height', 1, 16, { content: 'height' }, 2],
  ['a two-channel normal', 3, 8, { content: 'normal', normal: { ...normal, count: 2 } }, 2],
  ['a packed file', 3, 8, { channels: { r: 'data', gb: 'data' } }, 4],
  ['8 bits made 16', 1, 8, { content: 'height', depth: 16 }, 2],
])('as written, %s takes %5$d bytes a texel', (_, channels, depth, settings, bytes) => {
  const manifest = limited({ overBudget: { bytes: 0, format: 'written' } }, chain(1), settings);
  const sources = [{ ...manifest.sources[0], channels, depth }];
  expect(overBudget({ ...manifest, sources })?.values.bytes).toBe(bytes);
});

test('targets and the chains of bounds take none of the budget', () => {
  const manifest = limited({ overBudget: { bytes: 4, format: 'rgba8' } }, [
    ...chain(1),
    { ...chain(1)[0], use: 'min' },
  ]);
  expect(overBudget({ ...manifest, targets: chain(64) })).toBeNull();
});

test.each([
  ['none', [0.5, 0.5, 0.5, 0.5], 0, null],
  ['at the limit', [0.5, 0.25, 0.5, 0.5], 0.5, null],
  ['the worst level', [0.5, 0.2, 0.1, 0.5], 0.5, { level: 2, share: '20 %', limit: '50 %' }],
  ['all of it', [0.3, 0.3, 0.3, 0], 0.9, { level: 3, share: '0 %', limit: '90 %' }],
  ['levels of less than 8x8 texels', [0.5, 0.5, 0.5, 0.5, 0, 0, 0], 0, null],
  ['gain', [0.3, 0.9, 1, 1], 0, null],
  ['an empty mask', [0, 0, 0, 0], 0, null],
])('thinning: %s', (_, coverages, limit, values) => {
  const problem = thinning(limited({ thinning: limit }, chain(64, coverages)));
  expect(problem?.values ?? null).toEqual(values);
});

test('thinning needs a limit and a mask', () => {
  expect(thinning(limited({}, chain(64, [1, 0, 0, 0])))).toBeNull();
  expect(thinning(limited({ thinning: 0 }, chain(8)))).toBeNull();
});

test('stale names what moved', () => {
  expect(stale([])).toBeNull();
  expect(say(stale(['source'])!)).toMatch(/^The source moved/);
  expect(say(stale(['source', 'settings', 'output'])!)).toMatch(/^The source, settings and output moved/);
});

test('a pointer is said to be one, with the bytes that it stands for', () => {
  const text = `version https://git-lfs.github.com/spec/v1\noid sha256:${'0'.repeat(64)}\nsize 12345\n`;
  expect(notDownloaded(Buffer.from(text))).toMatchObject({ code: 'not-downloaded', values: { bytes: 12345 } });
  expect(text.length).toBeLessThan(POINTER_BYTES);
  expect(notDownloaded(Buffer.from('\x89PNG\r\n\x1a\n'))).toBeNull();
});

test('the table names each finding once, and the manifest is judged by all that can be', () => {
  expect(new Set(findings.map((each) => each.name)).size).toBe(findings.length);
  for (const each of findings) expect(each.judge !== undefined).toBe(each.from === 'manifest');
  const manifest = limited({ thinning: 0, overBudget: { bytes: 0, format: 'written' } }, chain(64, [1, 0, 0, 0]));
  expect(judgeManifest(manifest).map((each) => each.code)).toEqual(['thinning', 'over-budget']);
  expect(budgetFormats).toContain('written');
});
