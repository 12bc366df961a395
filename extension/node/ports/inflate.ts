import { Readable } from 'node:stream';
import { createInflate, inflateSync } from 'node:zlib';
import { type Inflate, InflateError } from '../../../core/port.ts';

/** Inflates with Node's zlib: at once what fits one buffer, else in steps on zlib's own thread. */
export const inflate: Inflate = async function* (pieces, limit) {
  if (limit >= BUFFER_BYTES) {
    yield* inflateInSteps(pieces, limit);
    return;
  }
  const kept = Array.from(pieces);
  const whole = inflateAtOnce(kept, limit);
  if (whole === null) yield* inflateInSteps(kept, limit);
  else yield whole;
};

/** Output is asked for in buffers of this size: few round trips, and little held beyond what the consumer has taken. */
const BUFFER_BYTES = 0x40000;

/** The buffer for `limit` bytes and the one too many; Node's zlib takes 64 bytes at least. */
function bufferBytes(limit: number): number {
  return Math.min(BUFFER_BYTES, Math.max(64, limit + 1));
}

/** The whole stream, or null where anything is wrong with it: reading in steps then tells what, and how far it came. */
function inflateAtOnce(pieces: readonly Uint8Array[], limit: number): Uint8Array | null {
  const input = Buffer.concat(pieces);
  const options = { chunkSize: bufferBytes(limit), maxOutputLength: Math.max(1, limit), info: true };
  try {
    const { buffer, engine } = inflateSync(input, options) as unknown as Informed;
    return engine.bytesWritten === input.length ? buffer : null;
  } catch {
    return null;
  }
}

/** What `info: true` gives; the type declarations leave it out. */
interface Informed {
  readonly buffer: Uint8Array;
  readonly engine: { readonly bytesWritten: number };
}

async function* inflateInSteps(pieces: Iterable<Uint8Array>, limit: number): AsyncGenerator<Uint8Array> {
  const feed = new Feed(pieces);
  const source = Readable.from(feed, { highWaterMark: 2 });
  const inflater = createInflate({ chunkSize: bufferBytes(limit) });
  // A pipe does not pass errors on.
  source.on('error', (error) => inflater.destroy(error));
  let left = limit + 1;
  try {
    for await (const piece of source.pipe(inflater)) {
      yield piece.length > left ? piece.subarray(0, left) : piece;
      left -= piece.length;
      if (left <= 0) return;
    }
  } catch (error) {
    throw new InflateError(faultOf(error));
  } finally {
    source.destroy();
    inflater.destroy();
  }
  // zlib stops reading at the end of its stream.
  if (feed.drainedBytes() > inflater.bytesWritten) throw new InflateError('surplus');
}

/** Bytes that zlib's thread is given at a time, where the pieces are smaller: many programs write chunks of 8 KiB, and each way there and
 *  back takes as long as inflating some of them. */
const FEED_BYTES = 1 << 16;

/** Counts the bytes that are asked for, and joins small pieces. */
class Feed implements Iterable<Uint8Array> {
  readonly #pieces: Iterator<Uint8Array>;
  #bytes = 0;

  constructor(pieces: Iterable<Uint8Array>) {
    this.#pieces = pieces[Symbol.iterator]();
  }

  *[Symbol.iterator](): Generator<Uint8Array> {
    let held: Uint8Array[] = [];
    let heldBytes = 0;
    for (let next = this.#pieces.next(); !next.done; next = this.#pieces.next()) {
      const piece = next.value;
      this.#bytes += piece.length;
      held.push(piece);
      heldBytes += piece.length;
      if (heldBytes < FEED_BYTES) continue;
      yield held.length === 1 ? piece : Buffer.concat(held);
      held = [];
      heldBytes = 0;
    }
    // zlib has nothing to do for an empty piece.
    if (heldBytes > 0) yield Buffer.concat(held);
  }

  /** All the bytes there are, those never asked for included. */
  drainedBytes(): number {
    for (const _ of this);
    return this.#bytes;
  }
}

function faultOf(error: unknown): 'corrupt' | 'truncated' {
  const code = (error as NodeJS.ErrnoException).code;
  if (code === 'Z_BUF_ERROR') return 'truncated';
  if (code === 'Z_DATA_ERROR' || code === 'Z_NEED_DICT') return 'corrupt';
  throw error;
}
