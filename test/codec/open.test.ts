import { describe, expect, test } from 'vitest';
import { imageExtension, openImage } from '../../core/codec/open.ts';
import { PEEK_BYTES, peekImage } from '../../core/codec/peek.ts';
import { readPointer } from '../../core/codec/pointer.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { chunk, concat, writePng } from '../fixtures/rawpng.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { writeTga } from '../fixtures/tga.ts';

const text = (...lines: string[]) => new Uint8Array(Buffer.from(`${lines.join('\n')}\n`, 'utf8'));
const OID = 'oid sha256:4d7a214614ab2935c943f9e0ff69d22eadbb8f32b1258daaa5e2ca24d17e2393';
const VERSION = 'version https://git-lfs.github.com/spec/v1';

const PNG_FILE = writePng({ width: 3, height: 2, bitDepth: 8, colorType: 2, sample: () => 1 });
const TGA_FILE = writeTga({ width: 3, height: 2, type: 2, texelBits: 32, attributeBits: 8, texel: () => 1 });

describe('A Git LFS pointer', () => {
  // [GitLFS, "Specification"]: the first is its own example.
  test.each([
    ['as specified', text(VERSION, OID, 'size 12345'), 12345],
    ['under the former name', text('version https://hawser.github.com/spec/v1', OID, 'size 1'), 1],
    ['with keys of extensions', text(VERSION, `ext-0-foo sha256:${'0'.repeat(64)}`, OID, 'size 7', 'x-unknown é'), 7],
    ['with CRLF line ends', text(`${VERSION}\r`, `${OID}\r`, 'size 99\r'), 99],
    ['of an empty file', text(VERSION, OID, 'size 0'), 0],
    ['without a last line end', text(VERSION, OID, 'size 5').subarray(0, -1), 5],
  ])('%s is not downloaded', async (_name, bytes, size) => {
    expect(readPointer(bytes)).toEqual({ oid: OID.slice(11), bytes: size });
    for (const path of ['a.png', 'a.TGA', 'a.jpg']) {
      expect(await problemOf(() => openImage(bytes, path, inflate))).toMatchObject({
        code: 'not-downloaded',
        values: { bytes: size },
      });
      expect(await problemOf(() => peekImage(bytes, path))).toMatchObject({ code: 'not-downloaded' });
    }
  });

  test.each([
    ['version not first', text(OID, VERSION, 'size 1')],
    ['another specification', text('version https://example.com/spec/v1', OID, 'size 1')],
    ['no size', text(VERSION, OID)],
    ['no oid', text(VERSION, 'size 1')],
    ['a short oid', text(VERSION, OID.slice(0, -1), 'size 1')],
    ['1024 bytes', text(VERSION, OID, 'size 1', 'x'.repeat(1024))],
    ['nothing', new Uint8Array(0)],
    ['an image', PNG_FILE],
  ])('is not seen in %s', (_name, bytes) => {
    expect(readPointer(bytes)).toBeNull();
  });
});

describe('Opening', () => {
  test('goes by the signature, then by the extension in any case', () => {
    expect(openImage(PNG_FILE, 'a/b.png', inflate).header.format).toBe('png');
    expect(openImage(PNG_FILE, 'a/b.tga', inflate).header.format).toBe('png');
    expect(openImage(TGA_FILE, 'a/b.TGA', inflate).header.format).toBe('tga');
  });

  test.each([
    ['a.png', TGA_FILE, 'png-signature', {}],
    ['a.PNG', new Uint8Array(0), 'file-empty', {}],
    ['a.tga', new Uint8Array(0), 'file-empty', {}],
    ['a/b.c/d', TGA_FILE, 'unknown-format', { extension: '(none)' }],
    ['a.JPG', TGA_FILE, 'unknown-format', { extension: '.JPG', known: '.png, .tga' }],
  ])('%s of the wrong content is %s', async (path, bytes, code, values) => {
    expect(await problemOf(() => openImage(bytes, path, inflate))).toMatchObject({ code, values });
  });

  test.each([
    ['x.png', '.png'],
    ['x.y.PnG', '.png'],
    ['d.png/x.TGA', '.tga'],
    ['d.png/x', null],
    ['x.png.bak', null],
    ['png', null],
  ])('the extension of %s is %s', (path, extension) => {
    expect(imageExtension(path)).toBe(extension);
  });
});

describe('A peek', () => {
  const rgb = { width: 300, height: 200, bitDepth: 8, colorType: 2, sample: (x: number) => x & 255 };
  const long = chunk('tEXt', new Uint8Array(PEEK_BYTES));
  const tRNS = chunk('tRNS', [0, 1, 0, 2, 0, 3]);

  test('agrees with what opening tells', () => {
    const PLTE = chunk('PLTE', [1, 2, 3, 4, 5, 6]);
    const indexed = { width: 5, height: 5, bitDepth: 1, colorType: 3, interlaced: 1 as const, sample: () => 1 };
    const files: (readonly [string, Uint8Array])[] = [
      ['a.png', writePng(rgb)],
      ['a.png', writePng({ ...rgb, ahead: [tRNS] })],
      ['a.png', writePng({ ...rgb, bitDepth: 16, colorType: 4 })],
      ['a.png', writePng({ ...indexed, ahead: [PLTE] })],
      ['a.png', writePng({ ...indexed, ahead: [PLTE, chunk('tRNS', [1])] })],
      ['a.tga', TGA_FILE],
      [
        'a.tga',
        writeTga({
          width: 5,
          height: 5,
          type: 9,
          texelBits: 8,
          texel: () => 0,
          map: { first: 0, entryBits: 24, entries: [1] },
        }),
      ],
    ];
    for (const [path, file] of files) {
      const { header } = openImage(file, path, inflate);
      for (const head of [file, file.subarray(0, 160)]) {
        expect(peekImage(head, path)).toEqual({
          format: header.format,
          extent: header.extent,
          channels: header.channels,
          depth: header.depth,
          indexed: header.indexed !== null,
          indexBits: header.indexed?.indexBits ?? 0,
          interlaced: header.interlaced,
          settled: true,
        });
      }
    }
  });

  test('says where transparency may still follow', () => {
    const head = writePng({ ...rgb, ahead: [long, tRNS] }).subarray(0, PEEK_BYTES);
    expect(peekImage(head, 'a.png')).toMatchObject({ channels: 3, settled: false });
    const alpha = writePng({ ...rgb, colorType: 6, ahead: [long] }).subarray(0, PEEK_BYTES);
    expect(peekImage(alpha, 'a.png')).toMatchObject({ channels: 4, settled: true });
  });

  test.each([
    ['a.png', PNG_FILE.subarray(0, 30), 'png-file-truncated'],
    ['a.tga', TGA_FILE.subarray(0, 10), 'tga-truncated'],
    ['a.png', concat([PNG_FILE.subarray(0, 33), tRNS, tRNS]), 'png-chunk-order'],
  ])('refuses a damaged head of %s as opening would', async (path, head, code) => {
    expect(await problemOf(() => peekImage(head, path))).toMatchObject({ code });
  });
});
