import { settingsTable } from '../../core/treatment/schema/settings-table.ts';

const BETWEEN = /(<!-- settings: [^>]*-->\n)[\s\S]*?(<!-- \/settings -->)/;

/** README with its tables of settings made anew. RangeError where it has lost the marks. */
export function withSettings(readme: string): string {
  if (!BETWEEN.test(readme)) throw new RangeError('Expected README.md to hold the marks of the settings tables');
  return readme.replace(BETWEEN, (_, open: string, close: string) => `${open}\n${settingsTable()}\n${close}`);
}
