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

  test('shows pictures that are there', () => {
    const pictures = [...readme.matchAll(/!\[[^\]]*\]\(([^)]+)\)/g)].map(([, path]) => path);
    expect(pictures.length).toBeGreaterThan(0);
    expect(pictures.filter((path) => !existsSync(join(top, path)))).toEqual([]);
  });
});
