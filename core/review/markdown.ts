import type { ReportRow } from './report.ts';

/** A report as Markdown with tables, for a comment on a change. Names cannot break the table, make links, mention people or refer to
 *  numbered things. Rows that would pass `limit` characters are counted instead. */
export function reportMarkdown(
  { before, after, rows, summary, problems }: MarkdownReport,
  limit: number = COMMENT_CHARACTERS,
): string {
  const head = [
    `### Texture changes, ${escapeMarkdown(before)} to ${escapeMarkdown(after)}`,
    '',
    escapeMarkdown(summary),
    '',
    ...problems.map((each) => `- ${escapeMarkdown(each)}`),
    ...(problems.length === 0 ? [] : ['']),
  ];
  if (rows.length === 0) return `${head.join('\n').trimEnd()}\n`;
  const lines = [...head, '| Impact | Texture | What changed | Seen at |', '| ---: | --- | --- | --- |'];
  let length = lines.join('\n').length;
  let written = 0;
  for (const row of rows) {
    const line = lineOf(row);
    if (length + line.length > limit) break;
    lines.push(line);
    length += line.length + 1;
    written++;
  }
  if (written < rows.length) lines.push('', `${rows.length - written} more are left out here.`);
  return `${lines.join('\n')}\n`;
}

export interface MarkdownReport {
  /** How people call the two ends. */
  readonly before: string;
  readonly after: string;
  /** In the order in which they are shown. */
  readonly rows: readonly ReportRow[];
  readonly summary: string;
  readonly problems: readonly string[];
}

/** Hosts of code take comments of 65 536 characters, common practice; the rest is left to who embeds this. */
const COMMENT_CHARACTERS = 60_000;

function lineOf({ score, status, texture, verdict, seen, harms, notes, remarks }: ReportRow): string {
  const what = [
    ...harms.map((each) => `**${escapeMarkdown(sentence(each))}**`),
    escapeMarkdown(verdict),
    ...(notes.length === 0 ? [] : [escapeMarkdown(sentence(notes.join('; ')))]),
    ...remarks.map((each) => `**${escapeMarkdown(each)}**`),
  ].join('<br>');
  return `| ${score} | ${escapeMarkdown(texture)} (${status}) | ${what} | ${escapeMarkdown(seen)} |`;
}

function sentence(text: string): string {
  return `${text.charAt(0).toUpperCase()}${text.slice(1)}.`;
}

/** Text that Markdown shows as it is, on one line. */
export function escapeMarkdown(text: string): string {
  return text
    .replace(/[\p{Cc}\p{Zl}\p{Zp}]+/gu, ' ')
    .replace(/&/g, '&amp;')
    .replace(/</g, '&lt;')
    .replace(/>/g, '&gt;')
    .replace(/[\\`*_[\]|~$]/g, '\\$&')
    .replace(/@/g, '&#64;')
    .replace(/#(?=\w)(?<!&#)/g, '&#35;')
    .replace(/:\/\//g, '&#58;//');
}
