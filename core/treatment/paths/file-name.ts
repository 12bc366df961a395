import { utf8Length } from './utf8.ts';

/** Bytes that a file's name may take in UTF-8. File systems take 255; a temporary name beside the file needs the rest. */
export const MAX_NAME_BYTES = 240;

export type NameFault = 'empty' | 'device' | 'ending' | 'character' | 'length' | 'segment';

/** Why one segment of a path cannot be a name on every system, or null.
 *  [WinNames] */
export function fileNameFault(name: string): NameFault | null {
  if (name === '') return 'empty';
  if (name === '.' || name === '..') return 'segment';
  // biome-ignore lint/suspicious/noControlCharactersInRegex: control characters are what it refuses.
  if (/[<>:"|?*\\/\u0000-\u001f\u007f-\u009f]|\p{Cs}/u.test(name)) return 'character';
  if (/[. ]$/.test(name)) return 'ending';
  if (device.test(name)) return 'device';
  return utf8Length(name) > MAX_NAME_BYTES ? 'length' : null;
}

/** Device names, alone or before an extension; the raised digits count as digits. */
const device = /^(?:con|prn|aux|nul|conin\$|conout\$|(?:com|lpt)[0-9\u00b9\u00b2\u00b3]) *(?:\.|$)/i;
