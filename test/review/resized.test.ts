import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import sharp, { type KernelEnum } from 'sharp';
import { expect, it } from 'vitest';
import { reviewTexture } from '../../core/review/review.ts';
import { nodePorts } from '../../extension/node/ports/ports.ts';
import { treatment } from '../fixtures/treatment.ts';

const running = { cancelled: false };
const plenty = { memoryBytes: 2 ** 30 };

const ICON = 'ui/lantern.png';
const LEAF = 'foliage/alder-twig.png';
const STONES = 'ground/cobbles.png';

function read(name: string): Buffer {
  return readFileSync(fileURLToPath(new URL(`../demo/${name}`, import.meta.url)));
}

async function verdict(before: Uint8Array, after: Uint8Array): Promise<string> {
  const [one, other] = [before, after].map((bytes) => ({ path: 'a.png', bytes, treatment: treatment() }));
  return (await reviewTexture(one, other, nodePorts, running, plenty)).verdict.kind;
}

// Whoever saved a file at half size did it with a program and a kernel of their own: sharp stands for them, in code space.
it.each<[string, keyof KernelEnum]>([
  [ICON, 'lanczos3'],
  [ICON, 'nearest'],
  [LEAF, 'cubic'],
  [LEAF, 'nearest'],
  [STONES, 'lanczos3'],
])('%s at half its size by %s is the same picture', async (name, kernel) => {
  const bytes = read(name);
  const { width } = await sharp(bytes).metadata();
  const half = await sharp(bytes)
    .resize({ width: width / 2, kernel })
    .png()
    .toBuffer();
  expect(await verdict(bytes, half)).toBe('resized');
});

it.each([
  [ICON, LEAF],
  [LEAF, ICON],
  [STONES, LEAF],
])('%s is another picture than %s', async (name, other) => {
  const bytes = read(name);
  const { width } = await sharp(bytes).metadata();
  const half = await sharp(read(other))
    .resize(width / 2, width / 2)
    .png()
    .toBuffer();
  expect(await verdict(bytes, half)).toBe('replaced');
});
