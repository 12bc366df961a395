import type { Fault } from '../../words.ts';
import { fileNameFault } from '../paths/file-name.ts';
import { globFault } from '../paths/glob.ts';
import { placeholders } from '../paths/pattern.ts';
import type { Grammar } from './shape.ts';

/** What is wrong with a text of the settings file; null where nothing is. */
export function textFault(text: string, grammar: Grammar): Fault | null {
  switch (grammar) {
    case 'any':
      return null;
    case 'folder':
      return text === '' ? empty('a folder') : pathFault(text);
    case 'glob':
      return pathFault(text) ?? globFault(text);
    case 'output-pattern':
      return pathFault(text) ?? patternFault(text, ['path', 'name', 'level', 'width', 'height', 'target']);
    case 'source-pattern':
      return pathFault(text) ?? patternFault(text, ['path', 'name']);
    case 'target':
      return targetFault(text);
    case 'target-name':
      return targetNameFault(text);
  }
}

/** Extents as texts have them: `48x48`. */
export const extentText = /^([1-9]\d{0,4})x([1-9]\d{0,4})$/;

/** Scales as texts have them: `2x`, `0.75x`. */
export const scaleText = /^(\d{1,2}(?:\.\d{1,6})?)x$/;

/** A path that would leave the root, on any system. */
function pathFault(path: string): Fault | null {
  const leaves =
    path.includes('\\') ||
    path.startsWith('/') ||
    /^[a-z]:/i.test(path) ||
    path.split('/').some((segment) => segment === '..');
  return leaves ? { code: 'leaves-root', values: { path } } : null;
}

function patternFault(pattern: string, known: readonly string[]): Fault | null {
  if (pattern === '' || pattern.endsWith('/')) return empty('a file name at its end');
  for (const name of placeholders(pattern)) {
    if (!known.includes(name)) {
      return {
        code: 'unknown-placeholder',
        values: { placeholder: `{${name}}`, known: known.map((each) => `{${each}}`).join(' ') },
      };
    }
  }
  return null;
}

function targetFault(text: string): Fault | null {
  const scale = scaleText.exec(text);
  if (scale !== null) return scaleInRange(Number(scale[1])) ? null : outOfRange('targets', 'a factor 1/1024..64', text);
  const extent = extentText.exec(text);
  const fits = extent !== null && Number(extent[1]) <= 16384 && Number(extent[2]) <= 16384;
  if (fits) return null;
  return outOfRange('targets', 'a scale such as "2x" or an extent such as "48x48", up to 16384 texels a side', text);
}

function scaleInRange(scale: number): boolean {
  return scale >= 1 / 1024 && scale <= 64;
}

/** A target's name is part of a file's name, and must not read as the number of a level. */
function targetNameFault(name: string): Fault | null {
  if (/^\d+$/.test(name)) return { code: 'bad-target-name', values: { name } };
  const fault = name.includes('/') ? 'segment' : fileNameFault(`x.${name}.png`);
  return fault === null && name !== '' && !/^[. ]|[. ]$/.test(name)
    ? null
    : { code: 'bad-target-name', values: { name } };
}

function outOfRange(key: string, expected: string, received: string): Fault {
  return { code: 'out-of-range', values: { key, expected, received: JSON.stringify(received) } };
}

function empty(expected: string): Fault {
  return { code: 'out-of-range', values: { key: 'This path', expected, received: 'none' } };
}
