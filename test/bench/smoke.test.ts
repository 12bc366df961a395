import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, it } from 'vitest';
import { isLeftOut } from '../host/skip.ts';
import { top } from '../house/tree.ts';
import { folderOfTests } from '../node/bundle.ts';
import { targets } from './targets.ts';

// A benchmark that nothing runs stops running. No time is asserted: only that everything is still measured.

it('measures everything once and reports it', () => {
  const out = join(folderOfTests(), 'RESULTS.md');
  const args = [join(top, 'run.mjs'), 'bench', '--smoke', '--out', out];
  const { status, stderr } = spawnSync(process.execPath, args, { cwd: top, encoding: 'utf8' });
  expect(stderr.includes('Error') ? stderr : '').toBe('');
  expect(status).toBe(0);
  const report = readFileSync(out, 'utf8');
  const rows = report.split('\n').filter((line) => line.startsWith('|'));
  for (const { goal } of targets) expect(rows.filter((row) => row.startsWith(`| ${goal} |`))).toHaveLength(1);
  for (const title of TITLES) expect(report).toMatch(new RegExp(`^## ${title}`, 'm'));
  const cells = rows.flatMap((row) => row.split('|').map((cell) => cell.trim()));
  expect(cells.filter((cell) => /NaN|Infinity|undefined|null/.test(cell))).toEqual([]);
  // Ours and peers were really compared: levels of the same sizes, and another kernel is another sum.
  const sums = cells.filter((cell) => /^[0-9a-f]{8}$/.test(cell));
  // `box` and `even` are the same where they make smaller; no other two are.
  expect(new Set(sums).size).toBe(sums.length - 1);
  expect(sums.length).toBeGreaterThanOrEqual(20);
}, 300_000);

const TITLES = [
  'Targets',
  'Limits of the machine',
  'The chain of',
  'Characters',
  'Any size, kernel and wrap',
  'Whole build of',
  'A folder of',
  'A project of',
  'A review of',
  'Memory of a build of',
  'Accuracy',
  'Cold start',
  ...(isLeftOut ? [] : ['The page']),
];
