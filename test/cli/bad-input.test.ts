import * as fs from 'node:fs';
import { deflateSync } from 'node:zlib';
import { expect, test } from 'vitest';
import { chunk, ihdr, joinPng, writePng } from '../fixtures/rawpng.ts';
import { filesBelow, newFolder, putFiles } from '../node/folder.ts';
import { smallPng } from '../node/project.ts';
import { sizeproof } from './cli.ts';

type Files = Readonly<Record<string, string | Uint8Array>>;

interface BadInput {
  readonly name: string;
  readonly files: Files;
  readonly code: string;
  /** `path:line:column` of the line on standard error. */
  readonly place: string;
  readonly exit: number;
  /** Further words that the line must hold. */
  readonly says?: RegExp;
  /** `.` where left out. */
  readonly paths?: readonly string[];
  readonly options?: readonly string[];
}

const png = smallPng(1);
const header = { width: 2, height: 1, bitDepth: 8, colorType: 0 };
const image = (bytes: readonly number[]) => chunk('IDAT', deflateSync(Uint8Array.from(bytes)));
const flipped = (bytes: Uint8Array, at: number) => bytes.map((byte, index) => (index === at ? byte ^ 0xff : byte));
const broken = (name: string, bytes: Uint8Array, code: string, says?: RegExp): BadInput => ({
  name,
  files: { 'leaf.png': bytes },
  code,
  place: 'leaf.png:1:1',
  exit: 3,
  ...(says === undefined ? {} : { says }),
});
const settings = (name: string, text: string, code: string, place: string, says?: RegExp): BadInput => ({
  name,
  files: { 'leaf.png': png, 'sizeproof.json': text },
  code,
  place: `sizeproof.json:${place}`,
  exit: 2,
  ...(says === undefined ? {} : { says }),
});

const table: readonly BadInput[] = [
  broken('an empty file', new Uint8Array(0), 'file-empty'),
  broken('a signature that a text transfer changed', flipped(png, 0), 'png-signature'),
  broken('a damaged header', flipped(png, 20), 'png-chunk-crc'),
  broken('damaged image data', flipped(png, png.length - 20), 'png-chunk-crc'),
  broken('a file cut off', png.subarray(0, png.length - 15), 'png-file-truncated'),
  broken('no image data', joinPng([ihdr(header)]), 'png-missing-chunk', /IDAT/),
  broken('a width of zero', joinPng([ihdr({ ...header, width: 0 }), image([0])]), 'extent-out-of-range', /0 x 1/),
  broken(
    'a huge extent',
    joinPng([ihdr({ ...header, width: 2 ** 31 - 1, height: 2 ** 31 - 1 }), image([0])]),
    'extent-out-of-range',
    /2147483647/,
  ),
  broken('truncated image data', joinPng([ihdr(header), image([0, 1])]), 'png-truncated', /2 of the 3 bytes/),
  broken('surplus image data', joinPng([ihdr(header), image([0, 1, 2, 3])]), 'png-surplus', /save it again/),
  broken(
    'a pointer of Git LFS',
    Buffer.from(`version https://git-lfs.github.com/spec/v1\noid sha256:${'0'.repeat(64)}\nsize 12345\n`),
    'not-downloaded',
    /12345 bytes/,
  ),
  {
    name: 'an image that needs more memory than is allowed',
    files: { 'leaf.png': writePng({ width: 2048, height: 2048, bitDepth: 8, colorType: 0, sample: () => 0 }) },
    options: ['--memory', '1MiB'],
    code: 'too-much-memory',
    place: 'leaf.png:1:1',
    exit: 2,
    says: /1048576 are allowed/,
  },
  settings('an unknown key', '{\n  "defaults": { "kernal": "box" } }', 'unknown-key', '2:17', /kernel/),
  settings('a wrong type', '{ "outDir": 1 }', 'wrong-type', '1:13'),
  settings('settings that are no JSON', '{ "outDir" }', 'settings-syntax', '1:12'),
  settings('a folder that leaves the root', '{ "outDir": "../x" }', 'leaves-root', '1:13'),
  settings(
    'a kernel that cannot do what is asked',
    '{ "defaults": { "kernel": "epx" } }',
    'kernel-direction',
    '1:17',
    /epx cannot minify.*Use kaiser/,
  ),
  {
    name: 'a glob that matches nothing',
    files: { 'leaf.png': png },
    paths: ['*.tga'],
    code: 'nothing-selected',
    place: '.:1:1',
    exit: 2,
    says: /\*\.tga/,
  },
  {
    name: 'a path that is not there',
    files: { 'leaf.png': png },
    paths: ['gone.png'],
    code: 'nothing-selected',
    place: '.:1:1',
    exit: 2,
  },
  {
    name: 'two sources with one output',
    files: { 'leaf.png': png, 'leaf.tga': png },
    code: 'same-output',
    place: 'leaf.tga:1:1',
    exit: 2,
    says: /leaf\.png and leaf\.tga/,
  },
  {
    name: 'a file where the output folder should be',
    files: { 'leaf.png': png, out: 'a file' },
    options: ['--out', 'out/deep'],
    code: 'output-unwritable',
    place: 'out/deep/leaf.1.png:1:1',
    exit: 4,
    says: /a file stands where a folder is needed/,
  },
  {
    name: 'one output folder for several roots',
    files: { 'a/sizeproof.json': '{}', 'a/leaf.png': png, 'b/sizeproof.json': '{}', 'b/leaf.png': png },
    options: ['--out', 'out'],
    code: 'several-roots',
    place: '.:1:1',
    exit: 2,
  },
  {
    name: 'a manifest of a newer format',
    files: { 'leaf.png': png, 'built/leaf.mips.json': '{ "format": 99 }' },
    code: 'manifest-newer',
    place: 'built/leaf.mips.json:1:1',
    exit: 3,
    says: /format 99/,
  },
];

test.each(table)('$name: one line with its code, path and numbers; no output is touched', async (row) => {
  const folder = newFolder(row.files);
  const before = filesBelow(folder);
  const words = ['build', ...(row.paths ?? ['.']), '--json', ...(row.options ?? [])];
  const { code, stderr, stdout } = await sizeproof(words, { folder });
  const lines = stderr.trimEnd().split('\n');
  expect(lines).toHaveLength(1);
  expect(lines[0]).toContain(`${row.place}: error ${row.code}: `);
  expect(lines[0]).toMatch(row.says ?? /./);
  expect(lines[0]).not.toMatch(/undefined|NaN|\{\w+\}|\[object/);
  expect(code).toBe(row.exit);
  const document = JSON.parse(stdout);
  expect(document).toMatchObject({ format: 1, command: 'build', summary: { built: 0 } });
  expect(document.problems).toMatchObject([{ code: row.code, severity: 'error' }]);
  expect(filesBelow(folder)).toEqual(before);
});

test('a link out of the folder is not written through', async () => {
  const outside = newFolder();
  const folder = newFolder({ 'leaf.png': png });
  fs.symlinkSync(outside, `${folder}/built`);
  const { code, stderr } = await sizeproof(['build', '.'], { folder });
  expect(stderr).toMatch(/^built\/leaf\.1\.png:1:1: error leaves-folder: /);
  expect([code, filesBelow(outside)]).toEqual([4, {}]);
});

test('a source link out of the folder is not read', async () => {
  const outside = newFolder({ 'secret.png': png });
  const folder = newFolder({ 'leaf.png': png });
  fs.symlinkSync(`${outside}/secret.png`, `${folder}/link.png`);
  const { code } = await sizeproof(['build', '.'], { folder });
  expect(code).toBe(0);
  expect(Object.keys(filesBelow(`${folder}/built`)).filter((name) => name.includes('link'))).toEqual([]);
});

test('of several kinds of trouble the highest exit code counts, and the rest is built', async () => {
  const folder = newFolder({
    'good/leaf.png': png,
    'bad/leaf.png': png.subarray(0, 50),
    'broken/sizeproof.json': '{ "outDri": "x" }',
    'broken/leaf.png': png,
  });
  const { code, stderr, stdout } = await sizeproof(['build', 'good', 'bad', 'broken', 'gone'], { folder });
  expect(code).toBe(3);
  expect(
    stderr
      .trimEnd()
      .split('\n')
      .map((line) => line.split(' ')[2])
      .sort(),
  ).toEqual(['nothing-selected:', 'png-file-truncated:', 'unknown-key:']);
  expect(stdout).toMatch(/1 built, 0 unchanged, 1 failed\.\n$/);
});

test('a name that would break a line is escaped', async () => {
  const folder = newFolder();
  putFiles(folder, { 'a\n\u001b[31mb.png': png.subarray(0, 50) });
  const { stderr } = await sizeproof(['build', '.'], { folder });
  expect(stderr).toMatch(/^a\\u000a\\u001b\[31mb\.png:1:1: error [^\n]*\n$/);
});
