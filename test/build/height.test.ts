import { expect, it } from 'vitest';
import { build, container, judged, pngOf } from '../fixtures/built.ts';
import { painted, picture } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';

const R8_UNORM = 9;
const R16_UNORM = 70;

it('keeps the fractions of 8-bit heights at 16 bits', async () => {
  const height = picture({ width: 2, height: 2 }, 1, 8, [0, 1, 1, 1]);
  const one = treatment({ content: 'height', depth: 16 });
  const { files, manifest } = await build(pngOf(height), one);
  // Level 0 is times 257; the mean 3/4 is 192.75, which rounds to 193.
  expect(Array.from(judged(files.get('art/moss.0.png')).codes)).toEqual([0, 257, 257, 257]);
  expect(Array.from(judged(files.get('art/moss.1.png')).codes)).toEqual([193]);
  const { vkFormat, levels } = container(files.get('art/moss.ktx2'), 16);
  expect(vkFormat).toBe(R16_UNORM);
  expect(levels.map(({ codes }) => Array.from(codes))).toEqual([[0, 257, 257, 257], [193]]);
  expect(manifest.notes).toEqual(['Level 0 is changed: 8 bits become 16.']);
});

it('carries fractions on: the next level comes from no rounded one', async () => {
  // Means of 1/4 and 3/4 code: their mean is 1/2, 128.5 of 16 bits, which is even at 128. From 64 and 193 it is 128.5 as
  // well, from the 8-bit codes 0 and 1 too, so a third level tells: (1/4 + 1/4) / 2 of 257 is 64.25.
  const row = [0, 0, 0, 1, 0, 0, 0, 1];
  const height = painted({ width: 8, height: 1 }, 1, 8, (x) => [row[x]]);
  const { files } = await build(pngOf(height), treatment({ content: 'height', depth: 16 }));
  expect(Array.from(judged(files.get('art/moss.1.png')).codes)).toEqual([0, 128, 0, 128]);
  expect(Array.from(judged(files.get('art/moss.2.png')).codes)).toEqual([64, 64]);
  expect(Array.from(judged(files.get('art/moss.3.png')).codes)).toEqual([64]);
});

it('rounds 16-bit heights to 8 bits', async () => {
  // 128 and 129 lie on either side of half a code, 128.5 / 257.
  const height = picture({ width: 4, height: 1 }, 1, 16, [128, 129, 65535, 65407]);
  const { files } = await build(pngOf(height), treatment({ content: 'height', depth: 8 }));
  expect(Array.from(judged(files.get('art/moss.0.png')).codes)).toEqual([0, 1, 255, 255]);
  // (128 + 129) / 2 / 257 is half a code and rounds to the even one.
  expect(Array.from(judged(files.get('art/moss.1.png')).codes)).toEqual([0, 255]);
  expect(container(files.get('art/moss.ktx2'), 8).vkFormat).toBe(R8_UNORM);
});

it('writes bounds as files of their own, from level 1 on', async () => {
  const height = painted({ width: 8, height: 1 }, 1, 8, (x) => [x * 10]);
  const one = treatment({ content: 'height', height: { minmax: true } });
  const { files, manifest } = await build(pngOf(height), one);
  // Two texels and one more on each side; then two of those and one more on each side.
  const rows = {
    min: [[0, 10, 30, 50], [0, 10], [0]],
    max: [[20, 40, 60, 70], [60, 70], [70]],
  };
  for (const use of ['min', 'max'] as const) {
    const levels = manifest.levels.filter((image) => image.use === use);
    expect(levels.map(({ level, extent }) => [level, extent])).toEqual([
      [1, [4, 1]],
      [2, [2, 1]],
      [3, [1, 1]],
    ]);
    rows[use].forEach((row, i) => {
      expect(Array.from(judged(files.get(`art/moss.${use}.${i + 1}.png`)).codes)).toEqual(row);
    });
    const { levels: stored } = container(files.get(`art/moss.${use}.ktx2`), 8);
    expect(stored.map(({ codes }) => Array.from(codes))).toEqual(rows[use]);
  }
});

it('bounds heights at the depth that is stored', async () => {
  const height = picture({ width: 2, height: 1 }, 1, 8, [3, 7]);
  const { files } = await build(pngOf(height), treatment({ content: 'height', depth: 16, height: { minmax: true } }));
  expect(Array.from(judged(files.get('art/moss.min.1.png')).codes)).toEqual([3 * 257]);
  expect(Array.from(judged(files.get('art/moss.max.1.png')).codes)).toEqual([7 * 257]);
});

it('bounds what is shipped alone, from every level above it', async () => {
  const height = painted({ width: 8, height: 1 }, 1, 8, (x) => [x * 10]);
  const one = treatment({
    content: 'height',
    height: { minmax: true },
    levels: { first: 2, last: 2 },
    kernel: both('b-spline'),
  });
  const { files } = await build(pngOf(height), one);
  expect([...files.keys()].filter((path) => path.endsWith('.png'))).toEqual([
    'art/moss.2.png',
    'art/moss.min.2.png',
    'art/moss.max.2.png',
  ]);
  expect(Array.from(judged(files.get('art/moss.max.2.png')).codes)).toEqual([60, 70]);
});

it('has no bounds where no level is shipped', async () => {
  const height = painted({ width: 8, height: 1 }, 1, 8, (x) => [x * 10]);
  const { files } = await build(
    pngOf(height),
    treatment({ content: 'height', height: { minmax: true }, levels: 'none' }),
  );
  expect([...files.keys()]).toEqual(['art/moss.ktx2']);
});
