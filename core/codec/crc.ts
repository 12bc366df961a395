/** CRC-32 as PNG chunks carry it, unsigned. `seed` is the CRC of the bytes that come before `bytes`, 0 for none.
 *  [PNG3, annex D "Sample CRC implementation"] */
export function crc32(bytes: Uint8Array, seed = 0): number {
  let crc = ~seed;
  for (let index = 0; index < bytes.length; index++) {
    crc = TABLE[(crc ^ bytes[index]) & 0xff] ^ (crc >>> 8);
  }
  return ~crc >>> 0;
}

/** The polynomial of ISO 3309 with its bits reversed, as the annex writes it. */
const POLYNOMIAL = 0xedb88320;

const TABLE = new Uint32Array(256).map((_, byte) => {
  let crc = byte;
  for (let bit = 0; bit < 8; bit++) {
    crc = crc & 1 ? POLYNOMIAL ^ (crc >>> 1) : crc >>> 1;
  }
  return crc;
});
