import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { findings } from '../../core/finding/table.ts';
import { commands, options } from '../../extension/cli/commands.ts';
import { withSettings } from './readme.ts';
import { top } from './tree.ts';

const readme = readFileSync(join(top, 'README.md'), 'utf8');

describe('README', () => {
  test('holds the tables of the settings as they are', () => {
    expect(withSettings(readme)).toBe(readme);
  });

  test('names every command, option and finding', () => {
    const names = [
      ...commands.map((each) => `\`${each.name}`),
      ...options.map((each) => `\`--${each.name}`),
      ...findings.map((each) => `\`${each.name}\``),
    ];
    expect(names.filter((name) => !readme.includes(name))).toEqual([]);
  });

  test('names every command and setting of the editor', () => {
    const { contributes } = JSON.parse(readFileSync(join(top, 'package.json'), 'utf8'));
    const texts = JSON.parse(readFileSync(join(top, 'package.nls.json'), 'utf8'));
    const titles = contributes.commands.map((each: { title: string }) => texts[each.title.replaceAll('%', '')]);
    const names = [...titles, ...Object.keys(contributes.configuration.properties).map((name) => `\`${name}\``)];
    expect(names.length).toBeGreaterThan(10);
    expect(names.filter((name) => !readme.includes(name))).toEqual([]);
  });

  test('quotes of speed what stands in the results, to two digits', () => {
    const results = readFileSync(join(top, 'test', 'bench', 'RESULTS.md'), 'utf8');
    const measured = (name: string): string => {
      const row = results.split('\n').find((line) => line.startsWith(`| ${name}`));
      // Name, target, stretch, measured.
      const [value, unit] = row?.split('|')[4].trim().split(' ') ?? [];
      if (unit === 'ms') return `${Math.round(Number(value))} ms`;
      return `${Number(value).toPrecision(2)} ${unit === 'x' ? 'times' : unit}`;
    };
    const text = readme.replaceAll('\n', ' ');
    const quoted = [
      [
        'the same chain of 4096x4096, against sharp in linear light',
        (it: string) => `${it} as fast as sharp in linear light`,
      ],
      [
        'the same chain of 4096x4096, against sharp in code space',
        (it: string) => `${it} as fast as sharp in code space`,
      ],
      ['whole build of a 4096x4096 PNG', (it: string) => `PNG levels out, ${it} as fast`],
      ['second build of 10 000 textures of which none', (it: string) => `of which none changed takes ${it}`],
      ['a 2048x2048 PNG opened in the editor', (it: string) => `first print of a 2048 x 2048 texture takes ${it}`],
      ['another kernel, to its print', (it: string) => `another kernel takes ${it}`],
    ] as const;
    for (const [name, say] of quoted) expect(text).toContain(say(measured(name)));
  });

  test('shows pictures that are there', () => {
    const pictures = [...readme.matchAll(/!\[[^\]]*\]\(([^)]+)\)/g)].map(([, path]) => path);
    expect(pictures.length).toBeGreaterThan(0);
    expect(pictures.filter((path) => !existsSync(join(top, path)))).toEqual([]);
  });
});
