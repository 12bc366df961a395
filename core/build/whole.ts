import type { BuiltFile } from '../job.ts';

/** All bytes of a file, for those who need them side by side. */
export async function wholeFile({ byteCount, pieces }: BuiltFile): Promise<Uint8Array> {
  const bytes = new Uint8Array(byteCount);
  let filled = 0;
  for await (const piece of pieces) {
    bytes.set(piece, filled);
    filled += piece.length;
  }
  return bytes;
}
