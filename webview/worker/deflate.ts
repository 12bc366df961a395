import type { Deflate } from '../../core/port.ts';

/** Deflates with the platform's stream, which takes no hints. */
export const deflate: Deflate = async function* (pieces) {
  const stream = new CompressionStream('deflate');
  const writing = write(pieces, stream.writable);
  writing.catch(() => {});
  const reader = stream.readable.getReader();
  for (;;) {
    const { done, value } = await reader.read();
    if (done) break;
    yield value;
  }
  await writing;
};

async function write(pieces: Iterable<Uint8Array>, writable: WritableStream<BufferSource>): Promise<void> {
  const writer = writable.getWriter();
  try {
    // A piece is only valid until the next one is asked for.
    for (const piece of pieces) await writer.write(piece.slice());
    await writer.close();
  } catch (error) {
    await writer.abort(error).catch(() => {});
    throw error;
  }
}
