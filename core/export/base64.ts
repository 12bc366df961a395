// Base 64 [RFC4648, 4], since core has no `btoa`.

const DIGITS = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/';

/** Bytes as one line of base 64, padded. */
export function base64(bytes: Uint8Array): string {
  const pieces: string[] = [];
  for (let start = 0; start < bytes.length; start += PIECE_BYTES) {
    pieces.push(pieceOf(bytes.subarray(start, start + PIECE_BYTES)));
  }
  return pieces.join('');
}

/** The same of bytes that are given as hexadecimal digits. */
export function base64OfHex(hex: string): string {
  return base64(Uint8Array.from(hex.match(/../g) ?? [], (pair) => Number.parseInt(pair, 16)));
}

/** Whole groups of three bytes, few enough for the arguments of one call. */
const PIECE_BYTES = 3 * 2048;

function pieceOf(bytes: Uint8Array): string {
  const letters = new Uint8Array(Math.ceil(bytes.length / 3) * 4);
  for (let from = 0, to = 0; from < bytes.length; from += 3, to += 4) {
    const left = bytes.length - from;
    const group = (bytes[from] << 16) | ((left > 1 ? bytes[from + 1] : 0) << 8) | (left > 2 ? bytes[from + 2] : 0);
    for (let digit = 0; digit < 4; digit++) {
      letters[to + digit] = digit <= left ? CODES[(group >> (18 - 6 * digit)) & 63] : PADDING;
    }
  }
  return String.fromCharCode(...letters);
}

const CODES = Uint8Array.from(DIGITS, (letter) => letter.charCodeAt(0));
const PADDING = '='.charCodeAt(0);
