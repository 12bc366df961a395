import { kernels } from '../../kernel/table.ts';
import { fileKeys, ruleKeys, walkKeys } from '../keys.ts';
import { describe, orList } from '../text/describe.ts';
import { paramRange } from '../text/kernel-choice.ts';
import { type Key, optionsOf } from '../text/shape.ts';
import { describeDefault } from './describe-default.ts';

/** Every setting as Markdown tables: keys of the file, keys of a treatment, kernels. */
export function settingsTable(): string {
  const file = fileKeys.map((key) => row(key.name, key));
  const rule = walkKeys(ruleKeys).map(({ path, key }) => row(path, key));
  return [
    table(['Key of the file', 'Takes', 'Default', 'What it does'], file),
    table(['Key of `defaults` and of a treatment', 'Takes', 'Default', 'What it does'], rule),
    table(['Kernel', 'Parameters', 'Makes smaller', 'Makes larger'], kernels.map(kernelRow)),
  ].join('\n');
}

type Row = readonly string[];

function row(path: string, key: Key): Row {
  return [
    `\`${path}\``,
    describe(key.shape).replaceAll(/"[^" ]*"/g, (text) => `\`${text}\``) + unitOf(key),
    describeDefault(key),
    key.says,
  ];
}

/** A unit that the range does not tell. */
function unitOf(key: Key): string {
  const units = optionsOf(key.shape).flatMap((shape) =>
    shape.kind === 'number' && shape.unit === 'share' ? ['share'] : [],
  );
  return units.length === 0 ? '' : ` (${orList(units)})`;
}

function kernelRow(kernel: (typeof kernels)[number]): Row {
  const params = kernel.params.map((param) => {
    const unit = param.unit === 'number' ? '' : ` ${param.unit}`;
    const fallback = param.default === 1 / 3 ? '1/3' : String(param.default);
    return `\`${param.name}\` ${paramRange(param)}${unit}, default ${fallback}`;
  });
  return [`\`${kernel.name}\``, params.join('; '), kernel.minifies ? 'yes' : 'no', kernel.magnifies ? 'yes' : 'no'];
}

function table(head: Row, rows: readonly Row[]): string {
  const line = (cells: Row) => `| ${cells.map((cell) => cell.replaceAll('|', '\\|')).join(' | ')} |\n`;
  return line(head) + line(head.map(() => '---')) + rows.map(line).join('');
}
