import { pipeline, Readable } from 'node:stream';
import { promisify } from 'node:util';
import { constants, createDeflate, deflateRaw } from 'node:zlib';
import { Adler } from '../../core/codec/adler.ts';
import type { Deflate, DeflateHints } from '../../core/port.ts';

/** zlib on Node's thread pool: the caller makes the next rows while the former ones are deflated, and where only runs are looked
 *  for, several parts of one stream are deflated at a time. */
export const deflate: Deflate = (pieces, hints) =>
  hints.strategy === 'rle' ? deflateBlocks(pieces, hints) : deflateWhole(pieces, hints);

async function* deflateWhole(pieces: Iterable<Uint8Array>, hints: DeflateHints): AsyncGenerator<Uint8Array> {
  const zlib = createDeflate({ level: hints.level, strategy: STRATEGIES[hints.strategy], chunkSize: BATCH_BYTES });
  // A piece that cannot be made destroys the stream, and the loop below throws what was thrown there.
  pipeline(Readable.from(batches(pieces, BATCH_BYTES), { highWaterMark: 1 }), zlib, () => {});
  for await (const piece of zlib) yield piece as Uint8Array;
}

const STRATEGIES: Readonly<Record<DeflateHints['strategy'], number>> = {
  default: constants.Z_DEFAULT_STRATEGY,
  filtered: constants.Z_FILTERED,
  huffman: constants.Z_HUFFMAN_ONLY,
  rle: constants.Z_RLE,
};

/** Bytes handed to the thread pool at a time. */
const BATCH_BYTES = 1 << 16;

/** A run reaches one byte back, so that a stream may begin anew at every block and loses some bytes by it: 0.05 % of painted art.
 *  The length of a block decides bytes; the encoder's sample is two of them long. */
const BLOCK_BYTES = 1 << 17;

/** Blocks that are deflated at a time. Node's pool has four threads unless it is told otherwise. */
const BLOCKS_AT_A_TIME = 4;

/** One zlib stream whose blocks are deflated apart: each ends on a whole byte, and an empty one is the last.
 *  [RFC1950, 2.2; RFC1951, 3.2.3] */
async function* deflateBlocks(pieces: Iterable<Uint8Array>, hints: DeflateHints): AsyncGenerator<Uint8Array> {
  const options = {
    level: hints.level,
    strategy: STRATEGIES[hints.strategy],
    finishFlush: constants.Z_SYNC_FLUSH,
    chunkSize: BATCH_BYTES,
  };
  const running: Promise<Uint8Array>[] = [];
  const sum = new Adler();
  yield Uint8Array.of(0x78, 0x9c);
  for (const block of batches(pieces, BLOCK_BYTES)) {
    sum.add(block);
    const made: Promise<Uint8Array> = deflateRawLater(block, options);
    // It is awaited in its turn; until then a failure is nobody's.
    made.catch(() => {});
    running.push(made);
    if (running.length === BLOCKS_AT_A_TIME) yield (await running.shift()) as Uint8Array;
  }
  for (const made of running) yield await made;
  yield Uint8Array.of(0x03, 0x00, ...sum.bytes());
}

const deflateRawLater = promisify(deflateRaw) as (
  bytes: Uint8Array,
  options: Parameters<typeof deflateRaw>[1],
) => Promise<Uint8Array>;

/** The pieces joined and cut into copies of one length: a piece is only valid until the next is asked for, and one trip to
 *  the thread pool for each row would cost more than the copy. */
function* batches(pieces: Iterable<Uint8Array>, byteCount: number): Iterable<Uint8Array> {
  let batch = new Uint8Array(byteCount);
  let filled = 0;
  for (const piece of pieces) {
    for (let at = 0; at < piece.length; ) {
      const part = piece.subarray(at, at + byteCount - filled);
      batch.set(part, filled);
      at += part.length;
      filled += part.length;
      if (filled === byteCount) {
        yield batch;
        batch = new Uint8Array(byteCount);
        filled = 0;
      }
    }
  }
  if (filled > 0) yield batch.subarray(0, filled);
}
