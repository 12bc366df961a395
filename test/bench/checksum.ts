/** A sum in which every byte counts by its value and by its place: a result that is faster because it is another one shows. FNV-1a
 *  of 32 bits over the bytes.  [Fowler, Noll, Vo] */
export function checksum(parts: readonly ArrayBufferView[]): string {
  let hash = 0x811c9dc5;
  for (const part of parts) {
    const bytes = new Uint8Array(part.buffer, part.byteOffset, part.byteLength);
    for (let at = 0; at < bytes.length; at++) hash = Math.imul(hash ^ bytes[at], 0x01000193);
  }
  return (hash >>> 0).toString(16).padStart(8, '0');
}
