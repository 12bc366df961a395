import { pipeline, Readable } from 'node:stream';
import { createDeflate } from 'node:zlib';
import type { Deflate } from '../../../core/port.ts';

/** zlib on Node's thread pool: the caller makes the next rows while the former ones are deflated. */
export const deflate: Deflate = async function* (pieces, { level }) {
  const zlib = createDeflate({ level, chunkSize: BATCH_BYTES });
  // A piece that cannot be made destroys the stream, and the loop below throws what was thrown there.
  pipeline(Readable.from(batches(pieces), { highWaterMark: 1 }), zlib, () => {});
  for await (const piece of zlib) yield piece as Uint8Array;
};

/** Bytes handed to the thread pool at a time. */
const BATCH_BYTES = 1 << 16;

/** The pieces joined and cut into copies of one length: a piece is only valid until the next is asked for, and one trip to
 *  the thread pool for each row would cost more than the copy. */
function* batches(pieces: Iterable<Uint8Array>): Iterable<Uint8Array> {
  let batch = new Uint8Array(BATCH_BYTES);
  let filled = 0;
  for (const piece of pieces) {
    for (let at = 0; at < piece.length; ) {
      const part = piece.subarray(at, at + BATCH_BYTES - filled);
      batch.set(part, filled);
      at += part.length;
      filled += part.length;
      if (filled === BATCH_BYTES) {
        yield batch;
        batch = new Uint8Array(BATCH_BYTES);
        filled = 0;
      }
    }
  }
  if (filled > 0) yield batch.subarray(0, filled);
}
