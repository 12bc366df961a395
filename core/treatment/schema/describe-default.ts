import type { Key } from '../text/shape.ts';

/** A key's default in words; empty for a group, whose keys have their own. */
export function describeDefault(key: Key): string {
  switch (key.default.kind) {
    case 'value':
      return key.default.value === null ? 'none' : `\`${JSON.stringify(key.default.value)}\``;
    case 'rule':
      return key.default.words;
    case 'required':
      return 'must be given';
    case 'inner':
      return '';
  }
}
