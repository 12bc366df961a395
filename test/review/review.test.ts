import { deflateSync } from 'node:zlib';
import { expect, test } from 'vitest';
import { type Refusal, refuse } from '../../core/problem.ts';
import { JUST_SEEN } from '../../core/review/lab.ts';
import { type Review, reviewTexture, type SideGiven } from '../../core/review/review.ts';
import type { ReviewSide } from '../../core/review/subject.ts';
import { sayVerdict } from '../../core/review/verdict.ts';
import { seenAt } from '../../core/review/visible.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { nodePorts } from '../../extension/node/ports/ports.ts';
import { encodePng } from '../demo/paint/png.ts';
import { encodeTga } from '../demo/paint/tga.ts';
import { blades, disc, grain, halved, paint, recut, withChunk } from '../fixtures/branch.ts';
import { writePng } from '../fixtures/rawpng.ts';
import { both, treatment } from '../fixtures/treatment.ts';

const running = { cancelled: false };
const plenty = { memoryBytes: 2 ** 30 };

function side(bytes: Uint8Array, settings: Treatment = treatment(), path = 'a.png'): ReviewSide {
  return { path, bytes, treatment: settings };
}

function review(before: SideGiven, after: SideGiven): Promise<Review> {
  return reviewTexture(before, after, nodePorts, running, plenty);
}

const picture = grain(64, 1);
const png = encodePng(picture);

const touched = grain(64, 1);
touched.codes.set([255, 255, 255], (5 * 64 + 7) * 3);

const faded = disc([0, 0, 0]);
faded.codes[(16 * 32 + 16) * 4 + 3] = 128;

const shifted = paint(64, 3, (x, y) => at(picture.codes, (((x - 4) % 64) + 64) % 64, y));
const slid = paint(64, 3, (x, y) => (x < 4 ? [0, 0, 0] : at(picture.codes, x - 4, y)));
const larger = paint(80, 3, (x, y) =>
  x >= 8 && x < 72 && y >= 8 && y < 72 ? at(picture.codes, x - 8, y - 8) : [0, 0, 0],
);
const doubled = paint(128, 3, (x, y) => at(picture.codes, x >> 1, y >> 1));

function at(codes: ArrayLike<number>, x: number, y: number): number[] {
  return [0, 1, 2].map((channel) => codes[(y * 64 + x) * 3 + channel]);
}

/** Two-color art as indices, its palette in either order. */
const indexed = (order: 'as is' | 'turned') =>
  encodePng({
    kind: 'indexed',
    extent: { width: 8, height: 8 },
    indexBits: 1,
    indices: Uint8Array.from({ length: 64 }, (_, texel) => (texel % 3 === 0 ? 1 : 0) ^ (order === 'turned' ? 1 : 0)),
    palette: Uint8Array.from(order === 'turned' ? [9, 9, 9, 255, 200, 0, 0, 255] : [200, 0, 0, 255, 9, 9, 9, 255]),
    alphaCount: 0,
  });

const wide = () =>
  writePng({
    width: 64,
    height: 64,
    bitDepth: 16,
    colorType: 2,
    sample: (x, y, c) => at(picture.codes, x, y)[c] * 257,
  });

const profile = Buffer.concat([Buffer.from('Wide\0\0', 'latin1'), deflateSync(Buffer.from('profile'))]);

test.each<[string, SideGiven, SideGiven, Review['verdict']['kind'], RegExp]>([
  ['nothing', side(png), side(png.slice()), 'same', /^Identical file\.$/],
  ['another encoding', side(png), side(recut(png, 50)), 'encoded', /^Same pixels, re-encoded\.$/],
  [
    'another format',
    side(encodePng(disc([9, 9, 9]))),
    side(encodeTga(disc([9, 9, 9])), treatment(), 'a.tga'),
    'encoded',
    /^Same pixels/,
  ],
  [
    'a text',
    side(png),
    side(withChunk(png, 'tEXt', Buffer.from('A\0b'))),
    'metadata',
    /only metadata changed: tEXt added/,
  ],
  [
    'a profile',
    side(png),
    side(withChunk(png, 'iCCP', profile)),
    'tagged',
    /only color chunks changed: iCCP Wide added/,
  ],
  ['depth', side(png), side(wide()), 'form', /^Same picture in another form: depth 8 bits to 16 bits/],
  ['palette order', side(indexed('as is')), side(indexed('turned')), 'form', /palette is in another order/],
  [
    'hidden color',
    side(encodePng(disc([0, 0, 0]))),
    side(encodePng(disc([9, 0, 0]))),
    'hidden',
    /^Only color under alpha 0/,
  ],
  [
    'alpha',
    side(encodePng(disc([0, 0, 0]))),
    side(encodePng(faded)),
    'alpha',
    /^Only alpha changed: under 0\.1 % .* in 1x1 at 16, 16\.$/,
  ],
  [
    'a texel',
    side(png),
    side(encodePng(touched)),
    'texels',
    /^under 0\.1 % of the texels changed, worst \d+ codes .* in 1x1 at 7, 5\.$/,
  ],
  [
    'numbers',
    side(png, treatment({ content: 'data' })),
    side(encodePng(touched), treatment({ content: 'data' })),
    'numbers',
    /worst \d+ codes, mean/,
  ],
  [
    'a turn round the edges',
    side(png),
    side(encodePng(shifted)),
    'moved',
    /^Moved by 4, 0 texels round the edges; 100 % /,
  ],
  ['a shift', side(png), side(encodePng(slid)), 'moved', /^Moved by 4, 0 texels; 100 % /],
  [
    'a border',
    side(png),
    side(encodePng(larger)),
    'cropped',
    /^Another extent, 64x64 to 80x80, with the same texels at 8, 8\.$/,
  ],
  [
    'half the size',
    side(png),
    side(encodePng(halved(picture))),
    'resized',
    /^Resized from 64x64 to 32x32, a factor of 0\.5: the same picture/,
  ],
  ['twice the size', side(png), side(encodePng(doubled)), 'resized', /^Resized from 64x64 to 128x128, a factor of 2/],
  [
    'another picture',
    side(png),
    side(encodePng(grain(48, 9))),
    'replaced',
    /^Another extent, 64x64 to 48x48, and another picture\.$/,
  ],
  ['a new file', null, side(png), 'added', /^Added: 64x64 RGB, 8 bits\.$/],
  ['a file that is gone', side(png), null, 'removed', /^Removed: 64x64 RGB, 8 bits\.$/],
  [
    'its treatment',
    side(png),
    side(png, treatment({ wrap: { x: 'repeat' } })),
    'treated',
    /wrap\.x "clamp-to-edge" to "repeat"/,
  ],
  [
    'a damaged file',
    side(png),
    side(png.slice(0, -20)),
    'unreadable',
    /^Cannot be compared: after: The file ends at byte/,
  ],
  [
    'no image',
    side(png),
    side(Buffer.from('no image'), treatment(), 'a.png'),
    'unreadable',
    /^Cannot be compared: after: The file begins with/,
  ],
  ['a damaged former file', side(png.slice(0, 99)), side(png), 'unreadable', /^Cannot be compared: before: /],
])('what changed is %s', async (_, before, after, kind, words) => {
  const { verdict } = await review(before, after);
  expect(verdict.kind).toBe(kind);
  expect(sayVerdict(verdict)).toMatch(words);
  expect(sayVerdict(verdict)).not.toMatch(/[{}]|undefined|NaN/);
});

test('a change of one texel is not seen at the small sizes', async () => {
  const { sizes, impact } = await review(side(png), side(encodePng(touched)));
  expect(sizes.map(({ extent }) => extent.width)).toEqual([64, 32, 16, 8, 4, 2, 1]);
  expect(seenAt(sizes)).toMatch(/^levels? 0(-[123])? only$/);
  expect(sizes.at(-1)?.difference?.worst).toBeLessThan(JUST_SEEN);
  expect(impact.score).toBeGreaterThan(0);
  expect(impact.score).toBeLessThan(1);
});

test('sizes are compared on what each treatment builds', async () => {
  const mask = treatment({ alpha: { use: 'mask', keepCoverage: false } });
  const kept = treatment({ alpha: { use: 'mask', keepCoverage: true } });
  const file = encodePng(blades(3));
  const { verdict, sizes, difference, settings, impact } = await review(side(file, kept), side(file, mask));
  expect(verdict.kind).toBe('treated');
  expect(settings).toEqual([{ key: 'alpha.keepCoverage', before: true, after: false }]);
  expect(difference?.texels).toBe(0);
  expect(sizes[0].difference?.texels).toBe(0);
  expect(sizes[4].before?.coverage).toBeGreaterThan(0.1);
  expect(sizes[4].after?.coverage).toBe(0);
  expect(impact.harms).toContainEqual(expect.objectContaining({ name: 'coverage-lost', severity: 1 }));
});

test('a file at half the size shows its level 0 where level 1 was', async () => {
  const box = treatment({ kernel: both('box') });
  const { sizes, before, after } = await review(side(encodePng(doubled), box), side(png, box));
  expect(sizes.map(({ extent }) => extent.width)).toEqual([128, 64, 32, 16, 8, 4, 2, 1]);
  expect(sizes[0].after?.extent.width).toBe(64);
  expect(sizes[1].after?.extent.width).toBe(64);
  // Blocks of 2x2 texels: area filtering gives the smaller file back, and what is made of both is the same from there on.
  expect(sizes.map(({ difference }) => difference?.texels === 0)).toEqual([false, ...Array(7).fill(true)]);
  expect([before?.memoryBytes, after?.memoryBytes].map((bytes) => bytes! / 3)).toEqual([21845, 5461]);
});

test('targets are compared by name', async () => {
  const [one, two] = [
    { name: '2x', scale: 2 },
    { name: 'icon', extent: [16, 16] as const },
  ];
  const { sizes } = await review(
    side(png, treatment({ targets: [one] })),
    side(png, treatment({ targets: [one, two] })),
  );
  expect(sizes.filter(({ image }) => 'target' in image)).toMatchObject([
    { image: { target: '2x' }, extent: { width: 128 }, difference: { texels: 0 } },
    { image: { target: 'icon' }, before: null, after: { extent: { width: 16 } }, difference: null },
  ]);
});

test.each<[string, SideGiven, SideGiven, string]>([
  [
    'alpha that is gone',
    side(encodePng(disc([0, 0, 0]))),
    side(encodePng(paint(32, 4, () => [255, 255, 255, 255]))),
    'alpha-lost',
  ],
  ['half the texels', side(png), side(encodePng(halved(picture))), 'texels-lost'],
  ['half the bits', side(wide()), side(png), 'depth-lost'],
  ['a profile', side(png), side(withChunk(png, 'iCCP', profile)), 'tag-added'],
  ['a gamma of 1', side(png), side(withChunk(png, 'gAMA', Uint8Array.of(0, 1, 134, 160))), 'tag-added'],
  ['a file that is damaged', side(png), side(png.slice(0, -20)), 'unreadable'],
])('%s does more harm than any repaint', async (_, before, after, harm) => {
  const { impact } = await review(before, after);
  expect(impact.harms.map(({ name }) => name)).toEqual([harm]);
  const repaint = await review(side(png), side(encodePng(paint(64, 3, () => [255, 0, 255]))));
  expect(repaint.impact.harms).toEqual([]);
  expect(repaint.impact.score).toBeGreaterThan(90);
  expect(impact.score).toBeGreaterThanOrEqual(100);
  expect(impact.score).toBeGreaterThan(repaint.impact.score);
});

test('what says sRGB, or takes a tag away, does no harm', async () => {
  const tagged = withChunk(png, 'sRGB', Uint8Array.of(0));
  expect((await review(side(png), side(tagged))).impact).toEqual({ score: 0, harms: [] });
  const wideTag = withChunk(png, 'iCCP', profile);
  expect((await review(side(wideTag), side(png))).impact.harms).toEqual([]);
});

test('a side that may not be held is refused in place', async () => {
  const { problems, verdict } = await reviewTexture(side(png), side(encodePng(touched)), nodePorts, running, {
    memoryBytes: 1000,
  });
  expect(verdict.kind).toBe('unreadable');
  expect(problems.map(({ problem }) => problem.code)).toEqual(['too-much-memory', 'too-much-memory']);
});

test('a side that cannot be had is told, and cancelling ends the work', async () => {
  const problem = problemOf(() => refuse('lfs-missing', { bytes: 5 }));
  const { verdict, problems } = await review(side(png), { problem });
  expect([verdict.kind, problems]).toEqual(['unreadable', [{ side: 'after', problem }]]);
  const ended = reviewTexture(side(png), side(encodePng(touched)), nodePorts, { cancelled: true }, plenty);
  await expect(ended).rejects.toThrow('cancelled');
});

function problemOf(act: () => never) {
  try {
    return act();
  } catch (error) {
    return (error as Refusal).problem;
  }
}
