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
  #fed: readonly Uint8Array[] = [];

  constructor(pieces: Iterable<Uint8Array>) {
    this.#pieces = pieces;
  }

  async into(writable: WritableStream<BufferSource>): Promise<void> {
    const writer = writable.getWriter();
    for (const piece of this.#pieces) {
      if (piece.length === 0) continue;
      this.#keep(piece);
      await writer.write(piece as Uint8Array<ArrayBuffer>);
    }
    await writer.close();
  }

  /** Keeps the last pieces, which hold `KEPT_BYTES` at least where there were so many. They are views of the file. */
  #keep(piece: Uint8Array): void {
    const fed = [...this.#fed, piece];
    let bytes = fed.reduce((sum, { length }) => sum + length, 0);
    while (fed.length > 1 && bytes - fed[0].length >= KEPT_BYTES) bytes -= fed.shift()!.length;
    this.#fed = fed;
  }

  /** Whether the last bytes fed hold a sum anywhere but at their very end. */
  holds(sum: Uint8Array): boolean {
    const bytes = joined(this.#fed);
    for (let at = 0; at + 4 < bytes.length; at++) {
      if (sum.every((byte, i) => bytes[at + i] === byte)) return true;
    }
    return false;
  }
}

const KEPT_BYTES = 1 << 16;

function joined(pieces: readonly Uint8Array[]): Uint8Array {
  const all = new Uint8Array(pieces.reduce((sum, { length }) => sum + length, 0));
  let at = 0;
  for (const piece of pieces) {
    all.set(piece, at);
    at += piece.length;
  }
  return all;
}
