import { crc32 } from '../../core/codec/crc.ts';

export interface Chunk {
  readonly name: string;
  readonly data: Uint8Array;
}

/** The chunks of a PNG, for tests: fails on a bad signature, length or CRC. */
export function readChunks(file: Uint8Array): Chunk[] {
  const view = new DataView(file.buffer, file.byteOffset, file.byteLength);
  if (view.getUint32(0) !== 0x89504e47 || view.getUint32(4) !== 0x0d0a1a0a) throw new Error('no PNG signature');
  const chunks: Chunk[] = [];
  for (let at = 8; at < file.length; ) {
    const length = view.getUint32(at);
    const name = String.fromCharCode(...file.subarray(at + 4, at + 8));
    if (view.getUint32(at + 8 + length) !== crc32(file.subarray(at + 4, at + 8 + length))) {
      throw new Error(`wrong CRC of ${name}`);
    }
    chunks.push({ name, data: file.subarray(at + 8, at + 8 + length) });
    at += 12 + length;
  }
  return chunks;
}

/** The data of the chunks of one name, joined; null where there is none. */
export function chunkData(chunks: readonly Chunk[], name: string): Uint8Array | null {
  const found = chunks.filter((chunk) => chunk.name === name);
  return found.length === 0 ? null : Buffer.concat(found.map((chunk) => chunk.data));
}
