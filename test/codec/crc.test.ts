import fc from 'fast-check';
import { expect, test } from 'vitest';
import { crc32 } from '../../core/codec/crc.ts';
import { crc32 as nodeCrc32 } from '../../extension/node/ports/crc.ts';

const ascii = (text: string) => Uint8Array.from(text, (letter) => letter.charCodeAt(0));

test.each([
  // The check value that catalogues of CRC-32 (ISO-HDLC) give for the nine digits.
  ['123456789', 0xcbf43926],
  // The CRC that ends every PNG file: an IEND chunk without data.
  ['IEND', 0xae426082],
  ['', 0],
])('crc of %s', (text, expected) => {
  expect(crc32(ascii(text))).toBe(expected);
});

test('a crc of pieces is the crc of the whole', () => {
  fc.assert(
    fc.property(fc.uint8Array({ maxLength: 300 }), fc.nat(300), (bytes, at) => {
      expect(crc32(bytes.subarray(at), crc32(bytes.subarray(0, at)))).toBe(crc32(bytes));
    }),
  );
});

test('agrees with the division written bit by bit, for views that start anywhere in their buffer', () => {
  fc.assert(
    fc.property(fc.uint8Array({ minLength: 1, maxLength: 60 }), fc.nat(20), (bytes, at) => {
      expect(crc32(bytes.subarray(at))).toBe(remainder(bytes.subarray(at)));
    }),
  );
});

test("Node's agrees, where it has one", () => {
  fc.assert(
    fc.property(fc.uint8Array({ maxLength: 300 }), fc.nat(0xffffffff), (bytes, seed) => {
      expect(nodeCrc32(bytes, seed)).toBe(crc32(bytes, seed));
    }),
  );
});

/** The polynomial of PNG 3rd edition, "CRC algorithm", highest power first: 0x04c11db7; bits of a byte lowest first. */
function remainder(bytes: Uint8Array): number {
  let crc = 0xffffffff;
  for (const byte of bytes) {
    for (let bit = 0; bit < 8; bit++) {
      const out = (crc >>> 31) ^ ((byte >> bit) & 1);
      crc = (crc << 1) ^ (out ? 0x04c11db7 : 0);
    }
  }
  let mirrored = 0;
  for (let bit = 0; bit < 32; bit++) mirrored |= ((~crc >>> bit) & 1) << (31 - bit);
  return mirrored >>> 0;
}
