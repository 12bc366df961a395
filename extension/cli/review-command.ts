import { REVIEW_BYTES, reviewPage } from '../../core/export/review-page.ts';
import { type Problem, Refusal, say } from '../../core/problem.ts';
import { reportMarkdown } from '../../core/review/markdown.ts';
import { type ReportRow, reportRow, sortByImpact } from '../../core/review/report.ts';
import { sayVerdict } from '../../core/review/verdict.ts';
import { seenAt } from '../../core/review/visible.ts';
import { resolvePath } from '../../core/treatment/paths/path.ts';
import { nodeDisk, slashed } from '../node/files/node-disk.ts';
import { writeWhole } from '../node/files/whole-file.ts';
import { type Range, readRange } from '../node/git/range.ts';
import { openVersions, type Versions } from '../node/git/versions.ts';
import { readPageCode } from '../node/page-code.ts';
import { nodePorts } from '../node/ports/ports.ts';
import { listFiles } from '../node/review/files.ts';
import { glanceEntries } from '../node/review/glance.ts';
import { type Judged, judgedGlance, judgedReview } from '../node/review/judge.ts';
import { listReview, type ReviewList } from '../node/review/list.ts';
import { reviewEntries } from '../node/review/run.ts';
import { sidesWithin } from '../node/review/sides.ts';
import { defaultMemoryBytes } from '../node/workers/memory.ts';
import type { Arguments } from './arguments.ts';
import { problemJson } from './print.ts';
import { openProgress } from './progress.ts';
import { nothingDone, onlyProblems, type Result, type Shell } from './shell.ts';
import { toolsOf } from './tools.ts';

/** `review`. */
export async function runReview(args: Arguments, shell: Shell): Promise<Result> {
  const memoryBytes = args.memoryBytes ?? defaultMemoryBytes();
  const versions = openVersions(nodeDisk);
  const tools = { disk: nodeDisk, versions };
  const cancel = {
    get cancelled() {
      return shell.isCancelled();
    },
  };
  try {
    const list = args.flags.has('files')
      ? await listFiles(nodeDisk, shell.folder, args.paths.map(slashed))
      : await listReview(shell.folder, rangeOf(args), tools, cancel);
    const judged: Judged[] = [];
    const progress = openProgress(shell.stderr);
    try {
      if (args.flags.has('headers')) {
        await glanceEntries(list.entries, tools, cancel, (index, glanced) => {
          judged[index] = judgedGlance(glanced);
        });
      } else {
        progress.begin(list.entries.length);
        const { run } = toolsOf(args, shell, memoryBytes);
        await reviewEntries(list.entries, { run, memoryBytes }, (index, reviewed) => {
          judged[index] = judgedReview(reviewed);
          progress.done();
        });
      }
    } finally {
      progress.clear();
    }
    const sorted = sortByImpact(judged.filter((each) => each !== undefined));
    const page = args.proof.html === null || cancel.cancelled ? null : await pageOf(list, sorted, versions);
    return await conclude(args, shell, list, sorted, page);
  } catch (error) {
    if (error instanceof Refusal) return onlyProblems([error.problem]);
    if (shell.isCancelled()) return { ...onlyProblems([]), cancelled: true };
    throw error;
  } finally {
    versions.close();
  }
}

function rangeOf(args: Arguments): Range {
  return args.flags.has('staged') ? { kind: 'index' } : readRange(args.paths[0]);
}

async function conclude(
  args: Arguments,
  shell: Shell,
  list: ReviewList,
  sorted: readonly Judged[],
  page: string | null,
): Promise<Result> {
  const rows = sorted.map(reportRow);
  const summary = summaryOf(list, sorted, shell.isCancelled());
  const problems: Problem[] = [...list.problems, ...distinct(sorted.flatMap((each) => each.problems))];
  const placed = problems.map((problem) => locate(problem, list.folder));
  if (args.markdown !== null) {
    const text = reportMarkdown({ ...list, rows, summary, problems: list.problems.map(say) });
    problems.push(...(await writeReport(resolvePath(shell.folder, slashed(args.markdown)), text)));
  }
  if (args.proof.html !== null && page !== null) {
    problems.push(...(await writeReport(resolvePath(shell.folder, slashed(args.proof.html)), page)));
  }
  const nameOf = (path: string): string => path;
  return {
    textures: sorted.map((each) => jsonOf(each, nameOf)),
    more: { before: list.before, after: list.after, outputs: list.outputs, excluded: list.excluded },
    problems: [...placed, ...problems.slice(placed.length)],
    summary: { ...nothingDone, failed: sorted.filter(({ failed }) => failed).length },
    lines: [`${list.before} to ${list.after}`, ...tableOf(rows), summary],
    cancelled: shell.isCancelled(),
  };
}

/** Paths of textures are relative to the repository's top. */
function locate(problem: Problem, folder: string): Problem {
  return problem.path === undefined ? problem : { ...problem, path: resolvePath(folder, problem.path) };
}

function distinct(problems: readonly Problem[]): Problem[] {
  const seen = new Map(problems.map((problem) => [JSON.stringify(problem), problem]));
  return [...seen.values()];
}

function summaryOf(list: ReviewList, judged: readonly Judged[], cancelled: boolean): string {
  const harmful = judged.filter(({ impact }) => impact.harms.length > 0).length;
  const failed = judged.filter((each) => each.failed).length;
  const count = (number: number, what: string): string => `${number} ${what}`;
  const left = [
    ...(list.outputs === 0 ? [] : [count(list.outputs, 'built files')]),
    ...(list.excluded === 0 ? [] : [count(list.excluded, 'excluded images')]),
  ];
  const parts = [
    `${judged.length === 1 ? '1 texture' : `${judged.length} textures`} changed`,
    count(harmful, 'with harm'),
    count(failed, 'over a limit or unreadable'),
    ...(left.length === 0 ? [] : [`${left.join(' and ')} left out`]),
  ];
  return `${parts.join(', ')}.${cancelled ? ' Interrupted.' : ''}`;
}

/** Columns of impact, change and texture; what happened stands below each, indented. */
function tableOf(rows: readonly ReportRow[]): string[] {
  if (rows.length === 0) return [];
  const score = Math.max('impact'.length, ...rows.map((row) => row.score.length));
  const status = Math.max('change'.length, ...rows.map((row) => row.status.length));
  const indent = ' '.repeat(score + status + 4);
  return [
    `${'impact'.padStart(score)}  ${'change'.padEnd(status)}  texture`,
    ...rows.flatMap((row) => [
      `${row.score.padStart(score)}  ${row.status.padEnd(status)}  ${row.texture}`,
      ...row.harms.map((each) => `${indent}harm: ${each}`),
      `${indent}${row.verdict}${row.seen === '' ? '' : ` Seen at ${row.seen}.`}`,
      ...(row.notes.length === 0 ? [] : [`${indent}${row.notes.join('; ')}`]),
    ]),
  ];
}

function jsonOf(judged: Judged, nameOf: (path: string) => string): object {
  const { path, oldPath, status, verdict, impact, review, manifest, failed, problems } = judged;
  return {
    path,
    oldPath,
    status,
    impact: impact.score,
    harms: impact.harms,
    verdict: { kind: verdict.kind, says: sayVerdict(verdict), values: verdict.values },
    seen: review === null ? '' : seenAt(review.sizes),
    manifest,
    failed,
    before: review?.before ?? null,
    after: review?.after ?? null,
    forms: review?.forms ?? [],
    settings: review?.settings ?? [],
    difference: review?.difference ?? null,
    sizes: review?.sizes ?? [],
    problems: problems.map((each) => problemJson(each, nameOf)),
  };
}

/** The review as the editor's panel shows it, in one file. */
async function pageOf(list: ReviewList, sorted: readonly Judged[], versions: Versions): Promise<string> {
  const { before: beforeLabel, after: afterLabel } = list;
  const entries = sorted.map(({ entry }) => entry);
  const sides = await sidesWithin(entries, versions, REVIEW_BYTES);
  const textures = sorted.map(({ path, oldPath, status, verdict, impact, manifest, problems }, index) => ({
    ...{ path, oldPath, status, verdict, impact, manifest, problems },
    ...sides[index],
  }));
  const page = {
    title: `Texture changes, ${beforeLabel} to ${afterLabel}`,
    code: readPageCode(new URL('./page/', import.meta.url)),
    language: 'en',
    words: {},
  };
  return reviewPage({ beforeLabel, afterLabel, textures, preferences: PREFERENCES }, page, nodePorts.newHash);
}

/** What the page starts with; 333 ms between two swaps is the least. */
const PREFERENCES = { backdrop: 'checker', swapDwell: 333 } as const;

/** Writes a report whole, or says why not. */
async function writeReport(path: string, text: string): Promise<Problem[]> {
  try {
    await writeWhole(nodeDisk, path, new TextEncoder().encode(text));
    return [];
  } catch (error) {
    if (error instanceof Refusal) return [error.problem];
    throw error;
  }
}
