import { expect, test } from 'vitest';
import { escapeMarkdown, reportMarkdown } from '../../core/review/markdown.ts';
import type { ReportRow } from '../../core/review/report.ts';

const row: ReportRow = {
  score: '1.0',
  status: 'changed',
  texture: 'a|b`<img src=x onerror=alert(1)> @team #12 [x](y) *\n_.png',
  verdict: 'Identical file.',
  seen: '',
  harms: [],
  notes: [],
  remarks: [],
};

const ends = { before: 'HEAD', after: 'working tree', summary: 'One.', problems: [] };

test('a name cannot break the table, make a link or mention anybody', () => {
  const text = reportMarkdown({ ...ends, rows: [row] });
  const line = text.trimEnd().split('\n').at(-1)!;
  // Bars that are not escaped stand between the cells alone.
  expect(line.match(/(?<!\\)\|/g)).toHaveLength(5);
  expect(line).not.toMatch(/<img|@team|(?<!&)#12|(?<!\\)[[\]`*]/);
});

test('what would not fit into a comment is counted', () => {
  const text = reportMarkdown({ ...ends, rows: Array.from({ length: 100 }, () => row) }, 2000);
  expect(text.length).toBeLessThan(2100);
  const shown = text.match(/^\| 1\.0/gm)!.length;
  expect(text).toContain(`${100 - shown} more are left out here.`);
});

test('addresses are no links', () => {
  expect(escapeMarkdown('https://example.org')).not.toContain('://');
});
