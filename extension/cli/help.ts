import { commands, type OptionEntry, options } from './commands.ts';

/** What `--help` prints, made from the tables that the command line is read by. */
export function helpText(version: string): string {
  const known: readonly OptionEntry[] = options;
  return [
    `Sizeproof ${version}: mip chains and targets in linear light, with a manifest that can rebuild and check them.`,
    '',
    ...commands.map((each) => `  ${`sizeproof ${each.name} ${each.takes}`.padEnd(42)}${each.says}`),
    '',
    ...known.map((each) => {
      const name = `--${each.name}${each.value === null ? '' : ` ${each.value}`}`;
      const where = each.commands.length === commands.length ? '' : ` [${each.commands.join(', ')}]`;
      return `  ${name.padEnd(22)}${each.says}${where}`;
    }),
    '',
    'A PATH is a file, a folder or a glob. Settings come from the nearest sizeproof.json in its folder or above.',
    '',
    'A RANGE is nothing for the working tree against the last commit, COMMIT for what it did, FROM..TO, or BASE...TIP for what a',
    'branch did since it left BASE; an end that is left out is HEAD.',
    '',
    'Exit codes: 0 fine; 1 stale outputs, findings or changes over their limit; 2 usage or settings; 3 a source could not be read;',
    '4 outputs could not be written; 130 interrupted, after tidying.',
    '',
  ].join('\n');
}
