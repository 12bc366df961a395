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

  test('shows pictures that are there', () => {
    const pictures = [...readme.matchAll(/!\[[^\]]*\]\(([^)]+)\)/g)].map(([, path]) => path);
    expect(pictures.length).toBeGreaterThan(0);
    expect(pictures.filter((path) => !existsSync(join(top, path)))).toEqual([]);
  });
});
