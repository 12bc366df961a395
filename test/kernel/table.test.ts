import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { allows, defaultParams, findKernel, kernels } from '../../core/kernel/table.ts';
import { weighing } from './cases.ts';

const references = readFileSync(new URL('../../core/REFERENCES.md', import.meta.url), 'utf8');

test('names are unique and found', () => {
  expect(new Set(kernels.map((kernel) => kernel.name)).size).toBe(kernels.length);
  for (const kernel of kernels) expect(findKernel(kernel.name)).toBe(kernel);
  expect(findKernel('toString')).toBeUndefined();
});

test('every kernel names its source in the references', () => {
  for (const kernel of kernels) {
    for (const key of kernel.source.split(', ')) expect(references).toMatch(new RegExp(`^- \\*{1,2}${key}\\*`, 'm'));
  }
});

test('every kernel does something, at defaults that it allows', () => {
  for (const kernel of kernels) {
    expect(kernel.minifies || kernel.magnifies).toBe(true);
    const params = defaultParams(kernel);
    expect(Object.keys(params)).toEqual(kernel.params.map((param) => param.name));
    for (const param of kernel.params) expect(allows(param, params[param.name])).toBe(true);
  }
});

test('a value between the allowed ones is not allowed', () => {
  const [lambda] = findKernel('detail')?.params ?? [];
  expect([0, 0.5, 1, 2, 0.75, -1, 3, Number.NaN].map((value) => allows(lambda, value))).toEqual([
    true,
    true,
    true,
    true,
    false,
    false,
    false,
    false,
  ]);
});

test('an interpolating kernel of weights is 1 at 0 and 0 at other whole distances', () => {
  for (const kernel of weighing) {
    const params = defaultParams(kernel);
    const weights = [0, 1, 2, 3, 4].map((x) => Math.abs(kernel.weight(x, params)));
    expect(weights[0] === 1 && weights.slice(1).every((weight) => weight === 0)).toBe(kernel.interpolates);
  }
});
