import { zlibSync } from 'fflate/browser';
import type { Deflate } from '../port.ts';

/** Deflates in plain JavaScript, which makes the same bytes on every platform: what is exported by one door equals what another
 *  exports. Takes no hints. Builds use the platform's zlib, which is faster. */
export const sameDeflate: Deflate = async function* (pieces) {
  const copies: Uint8Array[] = [];
  for (const piece of pieces) copies.push(piece.slice());
  const bytes = new Uint8Array(copies.reduce((sum, { length }) => sum + length, 0));
  let at = 0;
  for (const copy of copies) {
    bytes.set(copy, at);
    at += copy.length;
  }
  yield zlibSync(bytes, { level: 6 });
};
