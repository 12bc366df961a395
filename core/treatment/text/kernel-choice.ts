import type { Node } from 'jsonc-parser';
import { allows, defaultParams, findKernel, type Kernel, type KernelParam, kernels } from '../../kernel/table.ts';
import type { KernelChoice } from '../treatment.ts';
import { figure } from './describe.ts';
import { nearest } from './nearest.ts';
import { type Reading, report } from './reading.ts';

/** Reads a kernel's name, or an object of its name and parameters; left-out parameters take their defaults. Undefined where
 *  there is a problem, which is reported. */
export function readKernel(
  reading: Reading,
  node: Node,
  hints: readonly string[],
  key: string,
): KernelChoice | undefined {
  if (node.type === 'string') {
    const kernel = knownKernel(reading, node, key);
    return kernel && { name: kernel.name, params: defaultParams(kernel) };
  }
  const before = reading.problems.length;
  const fields = (node.children ?? []).map((property) => property.children as [Node, Node]);
  const named = fields.find(([name]) => name.value === 'name')?.[1];
  if (named === undefined) {
    reportNameless(reading, node, hints);
    return undefined;
  }
  const kernel = knownKernel(reading, named, `${key}.name`);
  if (kernel === undefined) return undefined;
  const params = readParams(reading, fields, kernel, key);
  return reading.problems.length === before ? { name: kernel.name, params } : undefined;
}

export const kernelNames: readonly string[] = kernels.map((kernel) => kernel.name);

/** `-2..0`, or the only values there are. */
export function paramRange(param: KernelParam): string {
  return param.allowed?.join(', ') ?? `${figure(param.min)}..${figure(param.max)}`;
}

function knownKernel(reading: Reading, node: Node, key: string): Kernel | undefined {
  if (node.type !== 'string') {
    report(reading, node, 'wrong-type', { key, expected: "a kernel's name", received: node.type });
    return undefined;
  }
  const kernel = findKernel(node.value);
  if (kernel === undefined) {
    const received = JSON.stringify(node.value);
    const choices = kernelNames.map((name) => JSON.stringify(name));
    report(reading, node, 'bad-choice', {
      key,
      received,
      nearest: nearest(received, choices),
      choices: choices.join(', '),
    });
  }
  return kernel;
}

function reportNameless(reading: Reading, node: Node, hints: readonly string[]): void {
  const params = kernels.flatMap((kernel) => kernel.params.map((param) => param.name));
  const strangers = (node.children ?? []).filter((property) => !params.includes(property.children?.[0].value));
  for (const { children } of strangers) {
    const name = children![0];
    report(reading, name, 'unknown-key', {
      key: name.value,
      nearest: nearest(name.value, [...new Set(['name', ...hints, ...params])]),
    });
  }
  if (strangers.length === 0) report(reading, node, 'missing-key', { key: 'name' });
}

function readParams(
  reading: Reading,
  fields: readonly [Node, Node][],
  kernel: Kernel,
  key: string,
): Record<string, number> {
  const params: Record<string, number> = { ...defaultParams(kernel) };
  const seen = new Map<string, Node>();
  for (const [name, value] of fields) {
    const earlier = seen.get(name.value);
    const param = kernel.params.find((each) => each.name === name.value);
    if (earlier !== undefined) {
      const { line, column } = reading.spot(earlier.offset);
      report(reading, name, 'duplicate-key', { key: name.value, first: `${line}:${column}` });
    } else if (param !== undefined) {
      readParam(reading, value, param, `${key}.${param.name}`, params);
    } else if (name.value !== 'name') {
      const known = ['name', ...kernel.params.map((each) => each.name)];
      report(reading, name, 'unknown-key', { key: name.value, nearest: nearest(name.value, known) });
    }
    seen.set(name.value, name);
  }
  return params;
}

function readParam(
  reading: Reading,
  node: Node,
  param: KernelParam,
  key: string,
  params: Record<string, number>,
): void {
  const expected = `${param.allowed === undefined ? 'a number ' : ''}${paramRange(param)}`;
  if (node.type !== 'number') report(reading, node, 'wrong-type', { key, expected, received: node.type });
  else if (!allows(param, node.value)) report(reading, node, 'out-of-range', { key, expected, received: node.value });
  else params[param.name] = node.value === 0 ? 0 : node.value;
}
