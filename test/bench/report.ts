import type { Environment } from './environment.ts';
import { digits, type Figure, type Table } from './figure.ts';
import { reaches, type Target, targets } from './targets.ts';

/** RESULTS.md: what was reached first, then everything that was measured. */
export function writeReport(environment: Environment, figures: readonly Figure[], tables: readonly Table[]): string {
  return [
    '# What was measured',
    '',
    'Written by `npm run bench`, which measures all of this anew; DEVELOPERS.md says how. Ratios were taken in turn in one',
    'process, a run of each contender a round, and are medians of the rounds; absolute times are those of this machine, which may',
    'have had other work. A MP is 2^20 texels of level 0.',
    '',
    ...(environment.note === null ? [] : [`> ${environment.note}`, '']),
    ...mark('environment', environmentLines(environment)),
    '',
    '## Targets',
    '',
    ...mark('targets', targetLines(figures)),
    '',
    ...mark('tables', tables.flatMap(tableLines)),
    '',
  ].join('\n');
}

function mark(name: string, lines: readonly string[]): string[] {
  return [`<!-- ${name}: written by \`npm run bench\` -->`, '', ...lines, '', `<!-- /${name} -->`];
}

function environmentLines(environment: Environment): string[] {
  return grid(
    ['Node', 'V8', 'processor', 'cores', 'system', 'date', 'commit', 'load before, after'],
    [
      [
        environment.node,
        environment.v8,
        environment.processor,
        String(environment.cores),
        environment.system,
        environment.date,
        environment.commit,
        environment.load,
      ],
    ],
  );
}

function targetLines(figures: readonly Figure[]): string[] {
  return grid(
    ['', 'target', 'stretch', 'measured', ''],
    targets.map((target) => {
      const figure = figures.find((each) => each.target === target.id);
      const measured = figure?.measured ?? { missing: 'left out of this run' };
      return [
        target.goal,
        boundText(target, target.target),
        boundText(target, target.stretch),
        typeof measured === 'number' ? `${digits(measured)} ${target.unit}` : measured.missing,
        typeof measured === 'number' ? verdict(target, measured) : '',
      ];
    }),
  );
}

function boundText({ better, unit }: Target, bound: number | null): string {
  return bound === null ? '' : `${better === 'more' ? 'at least' : 'at most'} ${bound} ${unit}`;
}

function verdict(target: Target, measured: number): string {
  if (target.stretch !== null && reaches(target, measured, target.stretch)) return 'reached, and the stretch';
  if (target.target === null) return '';
  return reaches(target, measured, target.target) ? 'reached' : '**missed**';
}

function tableLines({ title, says, columns, rows }: Table): string[] {
  return [`## ${title}`, '', says, '', ...grid(columns, rows), ''];
}

function grid(columns: readonly string[], rows: readonly (readonly string[])[]): string[] {
  const line = (cells: readonly string[]): string => `| ${cells.join(' | ')} |`;
  return [line(columns), line(columns.map(() => '---')), ...rows.map(line)];
}
