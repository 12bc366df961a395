import { refuse } from '../../problem.ts';
import { type Crc32, crc32 as plainCrc32 } from '../crc.ts';

/** One chunk of a PNG datastream. `offset` is where its length field starts; `body` views the file. */
export interface Chunk {
  readonly name: string;
  readonly offset: number;
  readonly body: Uint8Array;
}

/** Bytes of a chunk beside its body: length, name and CRC. */
export const CHUNK_FRAME_BYTES = 12;

/** [PNG3, 5.2 "PNG signature"] */
export const PNG_SIGNATURE: readonly number[] = [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a];

export function hasSignature(bytes: Uint8Array): boolean {
  return PNG_SIGNATURE.every((byte, index) => bytes[index] === byte);
}

/** Refuses a file whose first eight bytes are not the PNG signature. */
export function checkSignature(bytes: Uint8Array): void {
  if (bytes.length === 0) refuse('file-empty', {});
  if (hasSignature(bytes)) return;
  refuse('png-signature', { found: hex(bytes.subarray(0, PNG_SIGNATURE.length)), expected: hex(PNG_SIGNATURE) });
}

/** The chunk at `offset`, its name and CRC checked; null where the bytes end before it does.
 *  [PNG3, 5.3 "Chunk layout"] */
export function readChunk(bytes: Uint8Array, offset: number, crc32: Crc32 = plainCrc32): Chunk | null {
  const name = readName(bytes, offset);
  if (name === null) return null;
  const end = offset + CHUNK_FRAME_BYTES + readUint32(bytes, offset);
  if (end > bytes.length) return null;
  const expected = readUint32(bytes, end - 4);
  const found = crc32(bytes.subarray(offset + 4, end - 4));
  if (found !== expected) {
    refuse('png-chunk-crc', { chunk: name, offset, found: hexWord(found), expected: hexWord(expected) });
  }
  return { name, offset, body: bytes.subarray(offset + 8, end - 4) };
}

/** Refuses a file that ends before the chunk at `offset` does. */
export function refuseCutChunk(bytes: Uint8Array, offset: number): never {
  const name = readName(bytes, offset);
  const bodyBytes = name === null ? 0 : readUint32(bytes, offset);
  // A file that stops cleanly between chunks lacks at least its last one.
  refuse('png-file-truncated', {
    chunk: name ?? 'IEND',
    found: bytes.length,
    expected: offset + CHUNK_FRAME_BYTES + bodyBytes,
  });
}

export function readUint32(bytes: Uint8Array, offset: number): number {
  return bytes[offset] * 0x1000000 + ((bytes[offset + 1] << 16) | (bytes[offset + 2] << 8) | bytes[offset + 3]);
}

export function readUint16(bytes: Uint8Array, offset: number): number {
  return (bytes[offset] << 8) | bytes[offset + 1];
}

function readName(bytes: Uint8Array, offset: number): string | null {
  if (offset + 8 > bytes.length) return null;
  const name = bytes.subarray(offset + 4, offset + 8);
  if (!name.every(isLetter)) refuse('png-chunk-name', { offset, found: hex(name) });
  return String.fromCharCode(...name);
}

function isLetter(byte: number): boolean {
  const upper = byte & ~0x20;
  return upper >= 0x41 && upper <= 0x5a;
}

function hex(bytes: Iterable<number>): string {
  return Array.from(bytes, (byte) => byte.toString(16).padStart(2, '0')).join(' ');
}

function hexWord(word: number): string {
  return word.toString(16).padStart(8, '0');
}
