import { expect, test } from 'vitest';
import { overHalo } from '../../core/finding/halo-limit.ts';
import { say } from '../../core/problem.ts';
import { writePng } from '../fixtures/rawpng.ts';
import { filesBelow, newFolder, putFiles } from './folder.ts';
import { build, check, settingsText, told } from './project.ts';

const halo = (image: number | string, worst: number) => ({ image, worst, x: 3, y: 4, share: 0.1234, clipped: 0.01 });

test('the worst image counts, above the limit and not at it', () => {
  const halos = [halo(1, 7.25), halo('2x', 9.96), halo(2, 3)];
  expect(overHalo(halos, 9.96)).toBeNull();
  expect(overHalo([], 0)).toBeNull();
  expect(say(overHalo(halos, 8)!)).toMatch(
    /^At target 2x, texel 3, 4, .* by 10 codes \(12\.3 % .* 1 % .*\); the limit is 8\./,
  );
  expect(overHalo([halo(1, 1)], 0)?.values.image).toBe('level 1');
});

/** A hard edge: what a kernel with negative lobes overshoots. */
const edge = writePng({ width: 32, height: 32, bitDepth: 8, colorType: 0, sample: (x) => (x < 15 ? 60 : 190) });

const settings = (kernel: string, limit: number | null) =>
  settingsText({ defaults: { kernel, alpha: { use: 'none' }, limits: { halo: limit } } });

test('check runs the chain where a limit is set, and writes nothing', async () => {
  const folder = newFolder({ 'edge.png': edge, 'sizeproof.json': settings('lanczos3', 8) });
  await build(folder);
  const before = filesBelow(folder);
  const checked = await check(folder);
  expect(told(checked, folder)).toEqual(['halo edge.png']);
  expect(checked.problems[0].values).toMatchObject({ limit: 8 });
  expect(Number(checked.problems[0].values.worst)).toBeGreaterThan(8);
  expect(checked.textures[0].moved).toEqual([]);
  expect(filesBelow(folder)).toEqual(before);
});

test.each([
  ['a kernel that only averages', settings('box', 1)],
  ['no limit', settings('lanczos3', null)],
])('%s has nothing to say', async (_, text) => {
  const folder = newFolder({ 'edge.png': edge, 'sizeproof.json': text });
  await build(folder);
  expect(told(await check(folder), folder)).toEqual([]);
});

test('a source that cannot be read is named once', async () => {
  const folder = newFolder({ 'edge.png': edge, 'sizeproof.json': settings('box', 8) });
  await build(folder);
  putFiles(folder, {
    'edge.png': `version https://git-lfs.github.com/spec/v1\noid sha256:${'0'.repeat(64)}\nsize 9\n`,
  });
  expect(told(await check(folder), folder)).toEqual(['not-downloaded edge.png', 'stale edge.png']);
});
