/** The codes of these lengths, turned round, so that their first bit is the lowest: shorter codes come first, and among equals
 *  the lower symbol. [RFC1951, 3.2.2] */
export function codesOf(lengths: Uint8Array): Uint16Array {
  const next = new Uint16Array(MOST_BITS + 2);
  for (const length of lengths) if (length > 0) next[length + 1]++;
  for (let length = 1; length < next.length; length++) next[length] = (next[length] + next[length - 1]) << 1;
  const codes = new Uint16Array(lengths.length);
  for (let symbol = 0; symbol < codes.length; symbol++) {
    const length = lengths[symbol];
    if (length > 0) codes[symbol] = turned(next[length]++, length);
  }
  return codes;
}

/** [RFC1951, 3.2.7] */
const MOST_BITS = 15;

function turned(code: number, length: number): number {
  return ((TURNED_BYTES[code & 0xff] << 8) | TURNED_BYTES[code >> 8]) >> (16 - length);
}

const TURNED_BYTES = Uint8Array.from({ length: 256 }, (_, byte) => {
  let turned = 0;
  for (let bit = 0; bit < 8; bit++) turned |= ((byte >> bit) & 1) << (7 - bit);
  return turned;
});
