/** Writes bits behind those that are there, the first into the lowest place of a byte. [RFC1951, 3.1.1] */
export class BitWriter {
  readonly #out: Uint8Array;
  #at: number;
  #held: number;
  #count: number;

  /** Behind the first `bit` bits of `out`. */
  constructor(out: Uint8Array, bit: number) {
    this.#out = out;
    this.#at = bit >> 3;
    this.#count = bit & 7;
    this.#held = this.#count === 0 ? 0 : out[this.#at] & ((1 << this.#count) - 1);
  }

  /** `count` is 0..24; `bits` has no others. */
  put(bits: number, count: number): void {
    this.#held |= bits << this.#count;
    this.#count += count;
    while (this.#count >= 8) {
      this.#out[this.#at++] = this.#held;
      this.#held >>>= 8;
      this.#count -= 8;
    }
  }

  /** Fills the byte with zeros. Gives where the next one starts. */
  align(): number {
    if (this.#count > 0) this.put(0, 8 - this.#count);
    return this.#at;
  }

  /** Where the bits end, in bits. What was put is all in its place. */
  end(): number {
    if (this.#count > 0) this.#out[this.#at] = this.#held;
    return 8 * this.#at + this.#count;
  }
}
