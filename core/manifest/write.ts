import type { Manifest } from './manifest.ts';
import { manifestShape } from './schema.ts';

/** The one text of a manifest: keys in the schema's order, two spaces a step, LF, a last line end; lists of plain values stay on
 *  one line. Numbers are ECMAScript's shortest form, which every engine writes alike. Throws Misfit for a manifest that no reader
 *  would take. */
export function writeManifest(manifest: Manifest): string {
  return `${write(manifestShape(manifest, ''), '')}\n`;
}

function write(value: unknown, indent: string): string {
  if (typeof value !== 'object' || value === null) return JSON.stringify(value);
  const inner = `${indent}  `;
  if (Array.isArray(value)) {
    if (value.every((each) => typeof each === 'number')) return `[${value.join(', ')}]`;
    return wrap(
      '[',
      value.map((each) => write(each, inner)),
      ']',
      indent,
    );
  }
  const entries = Object.entries(value).map(([key, each]) => `${JSON.stringify(key)}: ${write(each, inner)}`);
  return wrap('{', entries, '}', indent);
}

function wrap(open: string, parts: readonly string[], close: string, indent: string): string {
  if (parts.length === 0) return open + close;
  return `${open}\n${parts.map((part) => `${indent}  ${part}`).join(',\n')}\n${indent}${close}`;
}
