import type { ColorChunk } from '../source.ts';
import { type Chunk, readUint32 } from './chunks.ts';

/** What a color chunk says, in words of its own; null for other chunks and for a body of the wrong length, which no
 *  reader obeys. An iCCP profile is named and not decoded.
 *  [PNG3, 11.3.2 "Color space information"] */
export function readColorChunk(chunk: Chunk): ColorChunk | null {
  const { name, body } = chunk;
  switch (name) {
    case 'gAMA':
      return body.length === 4 ? { name, value: String(readUint32(body, 0)) } : null;
    case 'cHRM':
      return body.length === 32 ? { name, value: listWords(body) } : null;
    case 'sRGB':
      return body.length === 1 ? { name, value: String(body[0]) } : null;
    case 'cICP':
      return body.length === 4 ? { name, value: body.join(' ') } : null;
    case 'iCCP':
      return { name, value: profileName(body) };
    default:
      return null;
  }
}

function listWords(body: Uint8Array): string {
  return Array.from({ length: body.length / 4 }, (_, index) => readUint32(body, index * 4)).join(' ');
}

/** Latin-1 up to the first zero byte, 79 bytes at most; control characters are left out, since it is shown. */
function profileName(body: Uint8Array): string {
  const end = body.indexOf(0);
  const name = body.subarray(0, Math.min(end < 0 ? body.length : end, 79));
  return String.fromCharCode(...name.filter((byte) => byte >= 0x20 && (byte < 0x7f || byte > 0xa0)));
}
