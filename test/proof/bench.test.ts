import { expect, test } from 'vitest';
import { buildChain, headOf } from '../../core/chain/chain.ts';
import { planChain } from '../../core/chain/plan.ts';
import { hashPixels } from '../../core/codec/pixels.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import { measureHalo } from '../../core/finding/halo.ts';
import { Cancelled } from '../../core/port.ts';
import { type BenchPorts, ProofBench } from '../../core/proof/bench.ts';
import { treatmentFor, withKernel } from '../../core/proof/variant.ts';
import { type Answers, type HaloAnswer, haloSide, type Print, type Want } from '../../core/proof/want.ts';
import { expandIndexed, type Raster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { painted } from '../fixtures/picture.ts';
import { both, kernel, treatment } from '../fixtures/treatment.ts';

const ports: BenchPorts = { inflate, newHash, pause: async () => {} };
const extent = { width: 37, height: 22 };
const opaque = noiseRaster(1, extent, 3, 8, 'noise');
const masked = withAlpha(noiseRaster(2, extent, 4, 8, 'noise'), 2, 3, 3);
const never = { cancelled: false };

async function benchOf(raster: typeof opaque): Promise<ProofBench> {
  return ProofBench.open(await encodePng(raster, deflate), 'a.png', ports);
}

async function ask<K extends Want['kind']>(bench: ProofBench, want: Want & { kind: K }): Promise<Answers[K]> {
  return (await bench.answer(want, never)) as Answers[K];
}

const mask: Partial<Treatment['alpha']> = { use: 'mask', keepCoverage: true };
const cases: readonly [string, typeof opaque, Treatment][] = [
  ['color', opaque, treatment({ kernel: both('lanczos3') })],
  ['a mask with coverage kept', masked, treatment({ alpha: mask })],
  ['moved codes', masked, treatment({ kernel: both('nearest'), derive: 'base' })],
  ['a chain that ships two levels', masked, treatment({ levels: { first: 1, last: 2 } })],
  ['normals', opaque, treatment({ content: 'normal' })],
  ['16 bits from 8', opaque, treatment({ depth: 16 })],
  ['premultiplied', masked, treatment({ alpha: { store: 'premultiplied' } })],
];

test.each(cases)('prints of %s are what the chain holds, code for code', async (_, raster, settings) => {
  const bench = await benchOf(raster);
  const target = { name: 'half again', scale: 1.5 };
  const built = buildChain(raster, { ...settings, targets: [target] });
  // The coarsest first: a bench makes no finer level than it is asked for.
  for (const image of [...built.images].reverse()) {
    const which = image.level === undefined ? { target } : { level: image.level };
    const print: Print = await ask(bench, { kind: 'print', treatment: settings, image: which });
    const { pixels } = await ask(bench, { kind: 'pixels', treatment: settings, image: which });
    expect(pixels).toBe(hashPixels(image.raster, newHash));
    expect(print.picture.codes).toEqual(codesOf(image.raster));
    expect(print.stats.coverage).toBe(image.coverage ?? null);
  }
});

test('prints are copies: what is given away does not come back changed', async () => {
  const bench = await benchOf(opaque);
  const want = { kind: 'print', treatment: treatment(), image: { level: 0 } } as const;
  (await ask(bench, want)).picture.codes.fill(0);
  expect((await ask(bench, want)).picture.codes).toEqual(opaque.codes);
});

test('a kernel is used in the directions that it can be', () => {
  const settings = treatment({ kernel: both('mitchell') });
  expect(withKernel(settings, kernel('epx'), 'default').kernel).toEqual({
    minify: kernel('mitchell'),
    magnify: kernel('epx'),
  });
  expect(withKernel(settings, kernel('majority'), 'default').derive).toBe('base');
  expect(withKernel(settings, kernel('majority'), 'kept').derive).toBe('previous');
});

test('the marks of a halo are as many as its shares say', async () => {
  const bench = await benchOf(opaque);
  const settings = treatment({ kernel: both('lanczos3') });
  const found: HaloAnswer = await ask(bench, { kind: 'halo', treatment: settings, image: { level: 1 } });
  const [halo] = measureHalo(opaque, settings).filter((each) => each.image === 1);
  expect(found.halo).toEqual(halo);
  const texels = found.marks!.length;
  expect(texels).toBe(18 * 11);
  expect(found.marks!.filter((mark) => (mark & 3) !== 0).length / texels).toBe(halo.share);
  expect(found.marks!.filter((mark) => (mark & 4) !== 0).length / texels).toBe(halo.clipped);
  const sides = found.marks!.map((mark) =>
    [0, 1, 2].reduce((some, channel) => some | Math.abs(haloSide(mark, channel)), 0),
  );
  expect(sides.filter((any) => any !== 0).length / texels).toBe(halo.share);
});

test('kernels that only average carry no marks; alpha 0 carries none either', async () => {
  const wide = { name: 'gaussian', params: { sigma: 1.5 } };
  // What a wide bell brings from beyond the range is blur, no overshoot.
  for (const choice of [kernel('box'), wide]) {
    const bench = await benchOf(opaque);
    const settings = treatment({ kernel: { minify: choice, magnify: choice } });
    const found: HaloAnswer = await ask(bench, { kind: 'halo', treatment: settings, image: { level: 2 } });
    expect(found).toMatchObject({ halo: { worst: 0 }, marks: null });
  }
  const image = { level: 1 };
  const half = painted({ width: 32, height: 8 }, 4, 8, (x) => (x < 15 ? [9, 9, 9, 0] : [250, 20, 250, 255]));
  const bench = await benchOf(half);
  const settings = treatment({ kernel: both('lanczos3') });
  const found: HaloAnswer = await ask(bench, { kind: 'halo', treatment: settings, image });
  const print: Print = await ask(bench, { kind: 'print', treatment: settings, image });
  const marked = [...found.marks!.keys()].filter((texel) => found.marks![texel] !== 0);
  expect(marked.length).toBeGreaterThan(0);
  expect(marked.filter((texel) => print.picture.codes[texel * 4 + 3] === 0)).toEqual([]);
});

test('marks stand where the picture stands: in its cell, and in the cells of a sheet', async () => {
  const bench = await benchOf(opaque);
  const settings = treatment({ kernel: both('lanczos3') });
  const target = { name: 'cell', cell: [30, 30] as const };
  const found: HaloAnswer = await ask(bench, { kind: 'halo', treatment: settings, image: { target } });
  const { left, top, picture } = planChain(headOf(opaque), { ...settings, levels: 'none', targets: [target] })
    .targets[0].place;
  expect(found.marks).toHaveLength(900);
  const outside = [...found.marks!.keys()].filter((texel) => {
    const [x, y] = [(texel % 30) - left, Math.floor(texel / 30) - top];
    return found.marks![texel] !== 0 && (x < 0 || y < 0 || x >= picture.width || y >= picture.height);
  });
  expect(outside).toEqual([]);
  expect(top + left).toBeGreaterThan(0);

  const cell = noiseRaster(5, { width: 16, height: 16 }, 3, 8, 'noise');
  const beside = noiseRaster(6, { width: 16, height: 16 }, 3, 8, 'noise');
  const sheet = painted({ width: 32, height: 16 }, 3, 8, (x, y) => {
    const [from, at] = x < 16 ? [cell, x] : [beside, x - 16];
    return [...from.codes.slice((y * 16 + at) * 3, (y * 16 + at) * 3 + 3)];
  });
  const levels = { ...settings, levels: { first: 0, last: 1 } };
  const want = { kind: 'halo', treatment: levels, image: { level: 1 } } as const;
  const whole: HaloAnswer = await ask(await benchOf(sheet), {
    ...want,
    treatment: { ...levels, grid: { cell: [16, 16], gutter: 0 } },
  });
  const alone: readonly HaloAnswer[] = [await ask(await benchOf(cell), want), await ask(await benchOf(beside), want)];
  const expected = Array.from({ length: 16 * 8 }, (_, texel) => {
    const [x, y] = [texel % 16, Math.floor(texel / 16)];
    return alone[x < 8 ? 0 : 1].marks![y * 8 + (x % 8)];
  });
  expect([...whole.marks!]).toEqual(expected);
});

test.each([
  ['previous', 'mitchell', 'repeat'],
  ['base', 'lanczos3', 'mirror-repeat'],
  ['previous', 'box', 'clamp-to-edge'],
] as const)('a footprint derived from %s by %s sums to the texel that it explains', async (derive, name, wrap) => {
  const data = noiseRaster(3, extent, 1, 16, 'middle');
  const settings = treatment({ content: 'data', kernel: both(name), derive, wrap: { x: wrap, y: wrap } });
  const bench = await benchOf(data);
  const image = { level: 2 };
  const { picture } = await ask(bench, { kind: 'print', treatment: settings, image });
  for (const [x, y] of [
    [0, 0],
    [4, 3],
    [8, 4],
  ] as const) {
    const { axes } = await ask(bench, { kind: 'footprint', treatment: settings, image, x, y });
    let sum = 0;
    axes!.y.texels.forEach((row, j) => {
      axes!.x.texels.forEach((column, i) => {
        sum += axes!.y.weights[j] * axes!.x.weights[i] * data.codes[row * extent.width + column];
      });
    });
    // Half a code of rounding, and float32 sums of some hundred terms of up to 65535: 65535 2^-24 100 at most.
    expect(Math.abs(picture.codes[y * picture.extent.width + x] - sum)).toBeLessThan(0.5 + 0.4);
  }
});

test('between levels a sampler at a level’s own place and size shows that level', async () => {
  const bench = await benchOf(opaque);
  const settings = treatment();
  const { picture: level } = await ask(bench, { kind: 'print', treatment: settings, image: { level: 1 } });
  const image = { lod: 1, extent: level.extent };
  expect((await ask(bench, { kind: 'print', treatment: settings, image })).picture.codes).toEqual(level.codes);
});

test('halfway between two flat levels lies their mean in linear light', async () => {
  // 188 is the code nearest to half of the light of 255.
  const board = { ...opaque, extent: { width: 2, height: 2 }, codes: new Uint8Array(12).fill(255) };
  board.codes.fill(0, 0, 6);
  const bench = await benchOf(board);
  const settings = treatment({ kernel: both('box') });
  const { picture } = await ask(bench, {
    kind: 'print',
    treatment: settings,
    image: { lod: 0.5, extent: { width: 1, height: 1 } },
  });
  expect([...picture.codes]).toEqual([188, 188, 188]);
});

test('a section reads the texels under the line', async () => {
  const bench = await benchOf(opaque);
  const row = await ask(bench, { kind: 'section', from: [0, 3.5 / 22], to: [1, 3.5 / 22] });
  expect(row.codes).toEqual(opaque.codes.slice(3 * 37 * 3, 4 * 37 * 3));
  const column = await ask(bench, { kind: 'section', from: [36.5 / 37, 1], to: [36.5 / 37, 0] });
  expect(column.codes.length).toBe(22 * 3);
  expect([...column.codes.slice(0, 3)]).toEqual([...opaque.codes.slice(-3)]);
});

test('what is no longer wanted ends', async () => {
  const cancel = { cancelled: false };
  const tall = noiseRaster(4, { width: 256, height: 1024 }, 3, 8, 'noise');
  const bench = await ProofBench.open(await encodePng(tall, deflate), 'a.png', {
    ...ports,
    pause: async () => {
      cancel.cancelled = true;
    },
  });
  await expect(bench.answer({ kind: 'levels', treatment: treatment() }, cancel)).rejects.toBeInstanceOf(Cancelled);
});

test('a hash that is no longer wanted ends, though its print is made', async () => {
  const cancel = { cancelled: false };
  let cancels = false;
  const tall = noiseRaster(4, { width: 256, height: 512 }, 3, 8, 'noise');
  const bench = await ProofBench.open(await encodePng(tall, deflate), 'a.png', {
    ...ports,
    pause: async () => {
      cancel.cancelled = cancels;
    },
  });
  const want = { treatment: treatment(), image: { level: 0 } } as const;
  await bench.answer({ kind: 'print', ...want }, cancel);
  cancels = true;
  await expect(bench.answer({ kind: 'pixels', ...want }, cancel)).rejects.toBeInstanceOf(Cancelled);
});

test('levels come with a cut of each and the overshoot of those made from weights', async () => {
  const bench = await benchOf(opaque);
  const { levels, halo } = await ask(bench, { kind: 'levels', treatment: treatment() });
  expect(levels.map((each) => each.extent.width)).toEqual([37, 18, 9, 4, 2, 1]);
  expect(levels[0].cut.codes).toEqual(opaque.codes);
  expect(halo.map((each) => each.level)).toEqual([1, 2, 3, 4, 5]);
});

test('a chain for one image holds it alone', () => {
  const settings = treatment({ targets: [{ name: '2x', scale: 2 }] });
  expect(treatmentFor(settings, { level: 3 }).targets).toEqual([]);
  expect(treatmentFor(settings, { target: { name: '3x', scale: 3 } })).toMatchObject({
    levels: 'none',
    targets: [{ name: '3x', scale: 3 }],
  });
});

function codesOf(raster: Raster) {
  return raster.kind === 'indexed' ? expandIndexed(raster).codes : raster.codes;
}
