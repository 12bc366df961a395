// UTF-8 [RFC3629], since core has neither TextDecoder nor TextEncoder.

/** The text of `bytes`, without a leading byte order mark; null where they are not UTF-8. */
export function decodeUtf8(bytes: Uint8Array): string | null {
  const pieces: string[] = [];
  let units: number[] = [];
  for (let i = 0; i < bytes.length; ) {
    const lead = bytes[i];
    const length =
      lead < 0x80
        ? 1
        : lead >= 0xc2 && lead < 0xe0
          ? 2
          : lead >= 0xe0 && lead < 0xf0
            ? 3
            : lead >= 0xf0 && lead < 0xf5
              ? 4
              : 0;
    if (length === 0 || i + length > bytes.length) return null;
    let point = length === 1 ? lead : lead & (0xff >> (length + 1));
    for (let k = 1; k < length; k++) {
      if ((bytes[i + k] & 0xc0) !== 0x80) return null;
      point = (point << 6) | (bytes[i + k] & 0x3f);
    }
    // Overlong forms, surrogates and points beyond the last are not UTF-8.
    if (point < leastOf[length] || (point >= 0xd800 && point < 0xe000) || point > 0x10ffff) return null;
    if (point < 0x10000) units.push(point);
    else units.push(0xd800 + ((point - 0x10000) >> 10), 0xdc00 + ((point - 0x10000) & 0x3ff));
    i += length;
    if (units.length >= 4096) {
      pieces.push(String.fromCharCode(...units));
      units = [];
    }
  }
  pieces.push(String.fromCharCode(...units));
  const text = pieces.join('');
  return text.charCodeAt(0) === 0xfeff ? text.slice(1) : text;
}

/** The bytes of `text`; a lone surrogate becomes U+FFFD, as an encoder of a browser has it. */
export function encodeUtf8(text: string): Uint8Array {
  const bytes = new Uint8Array(utf8Length(text));
  let at = 0;
  for (const character of text) {
    const given = character.codePointAt(0) as number;
    const point = given >= 0xd800 && given < 0xe000 ? 0xfffd : given;
    const length = point < 0x80 ? 1 : point < 0x800 ? 2 : point < 0x10000 ? 3 : 4;
    for (let k = length - 1; k > 0; k--) bytes[at + k] = 0x80 | ((point >> (6 * (length - 1 - k))) & 0x3f);
    bytes[at] = LEADS[length] | (point >> (6 * (length - 1)));
    at += length;
  }
  return bytes;
}

/** Bytes that the text takes; a lone surrogate counts as three. */
export function utf8Length(text: string): number {
  let bytes = 0;
  for (const character of text) {
    const point = character.codePointAt(0) as number;
    bytes += point < 0x80 ? 1 : point < 0x800 ? 2 : point < 0x10000 ? 3 : 4;
  }
  return bytes;
}

/** What the first byte begins with, by length. */
const LEADS = [0, 0, 0xc0, 0xe0, 0xf0];

/** The least point of each length. */
const leastOf = [0, 0, 0x80, 0x800, 0x10000];
