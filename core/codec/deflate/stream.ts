import { type Before, writeBlock } from './block.ts';
import { BLOCK_BYTES, plainTokens, type Tokens } from './tokens.ts';

/** One zlib stream of the pieces, whose bytes are the same on every platform. Nothing is matched but runs of a byte: for what has
 *  been filtered and is grain then. A piece is only valid until the next is asked for. [RFC1950; RFC1951] */
export function* deflateRuns(pieces: Iterable<Uint8Array>, tokens: Tokens = plainTokens): Generator<Uint8Array> {
  const writer = tokens.open();
  const { block, out } = writer;
  let filled = 0;
  let before: Before = { bit: 0, zeros: 5 };
  let sum = 1;
  const end = (place: 'last' | 'inner'): Uint8Array => {
    sum = writer.sum(filled, sum);
    const { bit, zeros } = writeBlock(writer, filled, before, place);
    filled = 0;
    const whole = place === 'last' ? (bit + 7) >> 3 : bit >> 3;
    const made = out.slice(0, whole);
    out[0] = out[whole];
    before = { bit: bit & 7, zeros };
    return made;
  };
  try {
    yield Uint8Array.of(0x78, 0x01);
    for (const piece of pieces) {
      for (let at = 0; at < piece.length; ) {
        if (filled === BLOCK_BYTES) yield end('inner');
        const part = piece.subarray(at, at + BLOCK_BYTES - filled);
        block.set(part, filled);
        at += part.length;
        filled += part.length;
      }
    }
    yield end('last');
    yield Uint8Array.of(sum >>> 24, sum >>> 16, sum >>> 8, sum);
  } finally {
    writer.close();
  }
}
