import * as fs from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { afterEach } from 'vitest';
import { slashed } from '../../extension/node/files/node-disk.ts';

const made: string[] = [];

afterEach(() => {
  for (const folder of made.splice(0)) fs.rmSync(folder, { recursive: true, force: true });
});

/** A new folder with these files, links resolved; removed after the test. */
export function newFolder(files: Readonly<Record<string, string | Uint8Array>> = {}): string {
  const folder = slashed(fs.realpathSync(fs.mkdtempSync(join(tmpdir(), 'sizeproof-'))));
  made.push(folder);
  putFiles(folder, files);
  return folder;
}

export function putFiles(folder: string, files: Readonly<Record<string, string | Uint8Array>>): void {
  for (const [path, content] of Object.entries(files)) {
    fs.mkdirSync(dirname(join(folder, path)), { recursive: true });
    fs.writeFileSync(join(folder, path), content);
  }
}

/** Every file below a folder, by path relative to it, in order, as Latin-1 text so that bytes compare. */
export function filesBelow(folder: string): Record<string, string> {
  if (!fs.existsSync(folder)) return {};
  const names = fs.readdirSync(folder, { recursive: true, withFileTypes: true });
  const paths = names.filter((each) => !each.isDirectory()).map((each) => slashed(join(each.parentPath, each.name)));
  return Object.fromEntries(
    paths.sort().map((path) => [path.slice(folder.length + 1), fs.readFileSync(path, 'latin1')]),
  );
}
