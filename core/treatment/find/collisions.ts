import type { Problem } from '../../problem.ts';
import { DEFAULT_NAME, MANIFEST_ENDING } from './names.ts';

/** A texture of a root with every file that its build would write, the manifest included, relative to the output folder. */
export interface TextureOutputs {
  readonly texture: string;
  readonly outputs: readonly string[];
}

/** A problem for each pair of textures that would write one file, and for each texture that would write one twice. Paths are
 *  compared without regard to case, since some file systems do so. */
export function findCollisions(list: readonly TextureOutputs[]): readonly Problem[] {
  const owners = new Map<string, string>();
  const found = new Map<string, Problem>();
  // Manifests first: where they collide, no `name` settles it.
  const ordered = [...list.flatMap(manifestsOf), ...list.flatMap(othersOf)];
  for (const { texture, output } of ordered) {
    const folded = foldCase(output);
    const first = owners.get(folded);
    if (first === undefined) owners.set(folded, texture);
    else if (!found.has(`${first}\n${texture}`)) found.set(`${first}\n${texture}`, collision(first, texture, output));
  }
  return [...found.values()];
}

/** Outputs that lie where a source is. `outDir` is the output folder relative to the root, empty for the root itself. */
export function findOverwrites(list: readonly TextureOutputs[], outDir: string): readonly Problem[] {
  const sources = new Map(list.map(({ texture }) => [foldCase(texture), texture]));
  return list.flatMap(({ texture, outputs }) =>
    outputs.flatMap((output) => {
      const source = sources.get(foldCase(outDir === '' ? output : `${outDir}/${output}`));
      if (source === undefined) return [];
      return [{ code: 'output-is-source' as const, severity: 'error' as const, values: { source }, path: texture }];
    }),
  );
}

/** A text in which letters that differ in case alone are equal, each character by itself. */
export function foldCase(text: string): string {
  // The common case, a hundred times as fast.
  if (isAscii(text)) return text.toLowerCase();
  return Array.from(text.normalize('NFC'), (character) => character.toUpperCase().toLowerCase())
    .join('')
    .normalize('NFC');
}

function isAscii(text: string): boolean {
  for (let at = 0; at < text.length; at++) if (text.charCodeAt(at) > 127) return false;
  return true;
}

interface Output {
  readonly texture: string;
  readonly output: string;
}

function manifestsOf({ texture, outputs }: TextureOutputs): readonly Output[] {
  return outputs.filter((output) => output.endsWith(MANIFEST_ENDING)).map((output) => ({ texture, output }));
}

function othersOf({ texture, outputs }: TextureOutputs): readonly Output[] {
  return outputs.filter((output) => !output.endsWith(MANIFEST_ENDING)).map((output) => ({ texture, output }));
}

function collision(first: string, second: string, output: string): Problem {
  if (first === second) return { code: 'output-twice', severity: 'error', values: { output }, path: second };
  return {
    code: 'same-output',
    severity: 'error',
    values: { first, second, output, line: settlingLine(second, output) },
    path: second,
  };
}

/** The settings line that takes the second texture out of the way. */
function settlingLine(texture: string, output: string): string {
  if (output.endsWith(MANIFEST_ENDING)) return `"exclude": [${JSON.stringify(texture)}]`;
  const name = DEFAULT_NAME.replace('{name}', '{name}-2');
  return `{ "match": ${JSON.stringify(texture)}, "name": ${JSON.stringify(name)} }`;
}
