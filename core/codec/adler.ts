/** Adler-32 of what went by.  [RFC1950, 8.2] */
export class Adler {
  #low: number;
  #high: number;

  /** `sum` is that of what came before. */
  constructor(sum = 1) {
    this.#low = sum & 0xffff;
    this.#high = sum >>> 16;
  }

  /** Unsigned. */
  get sum(): number {
    return ((this.#high << 16) | this.#low) >>> 0;
  }

  add(bytes: Uint8Array): void {
    let [low, high] = [this.#low, this.#high];
    for (let at = 0; at < bytes.length; ) {
      // 5552 is the most bytes whose sums stay below 2^32; these stay below 2^31, where numbers are quicker.
      for (const end = Math.min(bytes.length, at + 3800); at < end; at++) {
        low += bytes[at];
        high += low;
      }
      low %= 65521;
      high %= 65521;
    }
    [this.#low, this.#high] = [low, high];
  }

  bytes(): Uint8Array {
    return Uint8Array.of(this.#high >> 8, this.#high & 255, this.#low >> 8, this.#low & 255);
  }
}
