import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';

import { say } from '../../core/problem.ts';
import { globMatcher } from '../../core/treatment/paths/glob.ts';
import { resolveTreatment, unusedTreatments } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { gallery } from './paint/gallery.ts';

const { settings, problems } = parseSettings(
  readFileSync(join(import.meta.dirname, 'sizeproof.json'), 'utf8'),
  'sizeproof.json',
);
const excluded = globMatcher(settings?.exclude ?? []);
const paths = gallery.map((each) => each.path).filter((path) => !excluded(path));

test('the demo’s settings are without fault, and every treatment hits something', () => {
  expect(problems.map(say)).toEqual([]);
  expect(settings && unusedTreatments(settings, paths).map(say)).toEqual([]);
});

// What makes the demo worth building: each row is a feature that its texture is there to show.
test.each([
  [
    'ground/cobbles.png',
    { content: 'color', wrap: { x: 'repeat', y: 'repeat' }, kernel: { minify: { name: 'kaiser' } } },
  ],
  [
    'ground/cobbles_normal.png',
    { content: 'normal', normal: { roughness: { path: 'ground/cobbles_rough.tga', channel: 'r' } } },
  ],
  [
    'foliage/alder-twig.png',
    { alpha: { use: 'mask', keepCoverage: true }, wrap: { x: 'clamp-to-edge' }, fill: 'hidden' },
  ],
  ['props/chain-link.tga', { alpha: { use: 'mask', keepCoverage: true }, wrap: { x: 'repeat' } }],
  [
    'props/boiler-plate_orm.png',
    { channels: { r: 'data', g: 'data', b: 'data' }, transfer: 'linear', kernel: { minify: { name: 'box' } } },
  ],
  ['terrain/bog.png', { content: 'height', depth: 16, height: { minmax: true } }],
  ['sprites/wick.png', { kernel: { magnify: { name: 'epx' } }, levels: 'none' }],
  ['sprites/wick-walk.png', { grid: { cell: [16, 16] }, kernel: { magnify: { name: 'nearest' } } }],
  ['ui/lantern.png', { targets: [{ name: '0.75x' }, { cell: [48, 48] }, { name: 'badge', extent: [24, 24] }] }],
])('%s is treated as it should be', (path, treatment) => {
  expect(paths).toContain(path);
  expect(resolveTreatment(settings, path).treatment).toMatchObject(treatment);
});

test('no texture is left without a row', () => {
  expect(paths).toHaveLength(9);
});
