import * as vscode from 'vscode';
import type { Problem } from '../../../core/problem.ts';
import type { BuildReport, CheckReport } from '../platform.ts';
import { sayProblemLine } from '../words.ts';

/** How a piece of work ended, in words. */
export interface Ending {
  readonly summary: string;
  /** For the log: a line a texture, then one a problem. */
  readonly lines: readonly { readonly severity: 'info' | 'warning' | 'error'; readonly text: string }[];
  readonly worst: 'fine' | 'warning' | 'error';
}

export interface BuildCounts {
  readonly built: number;
  readonly unchanged: number;
  readonly failed: number;
}

export function countBuild({ textures }: Pick<BuildReport, 'textures'>): BuildCounts {
  const count = (action: string) => textures.filter((each) => each.action === action).length;
  return { built: count('built'), unchanged: count('unchanged'), failed: count('failed') };
}

export function buildEnding(report: BuildReport, nameOf: (path: string) => string): Ending {
  const counts = countBuild(report);
  const said = vscode.l10n.t('{built} built, {unchanged} unchanged, {failed} failed.', { ...counts });
  const pruned = vscode.l10n.t('{count} removed.', { count: report.pruned.length });
  const stopped = vscode.l10n.t('Interrupted; build again to go on.');
  const parts = [said, ...(report.pruned.length > 0 ? [pruned] : []), ...(report.cancelled ? [stopped] : [])];
  const built = report.textures.filter((each) => each.action === 'built');
  return {
    summary: parts.join(' '),
    lines: [
      ...built.map(({ source, manifest, outputs, reasons }) => ({
        severity: 'info' as const,
        text: vscode.l10n.t('built {source} -> {manifest} and {files} files ({reasons})', {
          source: nameOf(source),
          manifest: nameOf(manifest),
          files: outputs.length,
          reasons: reasons.join(', '),
        }),
      })),
      ...problemLines(report.problems, nameOf),
    ],
    worst: worstOf(report.problems),
  };
}

export function checkEnding(report: CheckReport, nameOf: (path: string) => string): Ending {
  const bad = new Set(report.problems.filter((each) => each.severity === 'error').map((each) => each.path));
  const failed = report.textures.filter(
    ({ moved, source, manifest }) => moved.length > 0 || bad.has(source) || bad.has(manifest),
  ).length;
  const same = report.textures.length - failed;
  return {
    summary: vscode.l10n.t('{same} as built, {failed} not, {orphans} orphaned.', {
      same,
      failed,
      orphans: report.orphans.length,
    }),
    lines: problemLines(report.problems, nameOf),
    worst: worstOf(report.problems),
  };
}

function problemLines(problems: readonly Problem[], nameOf: (path: string) => string): Ending['lines'] {
  return problems.map((problem) => ({ severity: problem.severity, text: sayProblemLine(problem, nameOf) }));
}

function worstOf(problems: readonly Problem[]): Ending['worst'] {
  if (problems.some((each) => each.severity === 'error')) return 'error';
  return problems.length > 0 ? 'warning' : 'fine';
}
