import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import ts from 'typescript';

/** A file of the project. `path` is relative to the top, "/"-separated. */
export interface Source {
  readonly path: string;
  readonly text: string;
}

/** The top of the tree. */
export const top: string = join(import.meta.dirname, '..', '..');

/** Every file below a folder (relative to the top, '' is all) whose name passes; what is installed or built is left out. */
export function readTree(folder: string, names: RegExp): Source[] {
  return listFiles(folder)
    .filter((path) => names.test(path))
    .map((path) => ({ path, text: readFileSync(join(top, path), 'utf8') }));
}

/** The TypeScript sources below some folders. */
export function readSources(...folders: string[]): Source[] {
  return folders.flatMap((folder) => readTree(folder, /\.ts$/));
}

/** Calls `visit` for every node of a source, parents first. */
export function walkSyntax(source: Source, visit: (node: ts.Node) => void): void {
  const each = (node: ts.Node): void => {
    visit(node);
    ts.forEachChild(node, each);
  };
  each(ts.createSourceFile(source.path, source.text, ts.ScriptTarget.ES2022, true));
}

/** `path:line` of a node, for messages. */
export function placeOf(source: Source, node: ts.Node): string {
  const line = source.text.slice(0, node.getStart()).split('\n').length;
  return `${source.path}:${line}`;
}

const SKIPPED = new Set(['node_modules', 'dist', '.git']);

function listFiles(folder: string): string[] {
  return readdirSync(join(top, folder), { withFileTypes: true }).flatMap((entry) => {
    const path = folder === '' ? entry.name : `${folder}/${entry.name}`;
    if (entry.isDirectory()) return SKIPPED.has(entry.name) ? [] : listFiles(path);
    return entry.isFile() ? [path] : [];
  });
}
