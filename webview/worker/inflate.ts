import { Adler } from '../../core/codec/adler.ts';
import { type Inflate, InflateError } from '../../core/port.ts';

/** Inflates with the platform's stream. It tells no fault from another, so the end of the data is looked at: zlib ends a stream
 *  with the Adler-32 sum of what it holds. */
export const inflate: Inflate = async function* (pieces, limit) {
  const feed = new Feed(pieces);
  const stream = new DecompressionStream('deflate');
  const feeding = feed.into(stream.writable);
  // Awaited below, but only after the reader has failed or ended: without this a fault would be an unhandled rejection.
  feeding.catch(() => {});
  const reader = stream.readable.getReader();
  const sum = new Adler();
  let left = limit + 1;
  try {
    for (;;) {
      const { done, value } = await reader.read();
      if (done) break;
      sum.add(value);
      yield value.length > left ? value.subarray(0, left) : value;
      left -= value.length;
      if (left <= 0) return;
    }
    await feeding;
  } catch (error) {
    if (!(error instanceof TypeError)) throw error;
    throw new InflateError(faultOf(error, feed, sum));
  } finally {
    await reader.cancel().catch(() => {});
    await feeding.catch(() => {});
  }
};

/** The stream fails with a TypeError for damage, for an end too early and for bytes after the end alike; only the last two
 *  come when everything was fed. */
function faultOf(error: TypeError, feed: Feed, sum: Adler): 'corrupt' | 'truncated' | 'surplus' {
  if (/trailing|junk|additional|after the end/i.test(error.message) || feed.holds(sum.bytes())) return 'surplus';
  if (/end of|incomplete|truncated|unexpected end|ended/i.test(error.message)) return 'truncated';
  return 'corrupt';
}

/** Hands pieces to a stream one by one, as it takes them. */
class Feed {
  readonly #pieces: Iterable<Uint8Array>;
  #fed = new Uint8Array(0);

  constructor(pieces: Iterable<Uint8Array>) {
    this.#pieces = pieces;
  }

  async into(writable: WritableStream<BufferSource>): Promise<void> {
    const writer = writable.getWriter();
    for (const piece of this.#pieces) {
      if (piece.length === 0) continue;
      this.#fed = joined(this.#fed.subarray(-KEPT_BYTES), piece);
      await writer.write(piece as Uint8Array<ArrayBuffer>);
    }
    await writer.close();
  }

  /** Whether the last bytes fed hold a sum anywhere but at their very end. */
  holds(sum: Uint8Array): boolean {
    const bytes = this.#fed;
    for (let at = 0; at + 4 < bytes.length; at++) {
      if (sum.every((byte, i) => bytes[at + i] === byte)) return true;
    }
    return false;
  }
}

const KEPT_BYTES = 1 << 16;

function joined(one: Uint8Array, other: Uint8Array): Uint8Array<ArrayBuffer> {
  const both = new Uint8Array(one.length + other.length);
  both.set(one);
  both.set(other, one.length);
  return both;
}
