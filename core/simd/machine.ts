/** The functions of core/simd/kernels, by name. Numbers are addresses and counts. */
export interface Kernels {
  along(row: number, phases: number, out: number, texels: number, stride: number): void;
  alongFours(row: number, phases: number, out: number, texels: number): void;
  alongSixes(row: number, phases: number, out: number, texels: number): void;
  alongTens(row: number, phases: number, out: number, texels: number): void;
  alongTwelves(row: number, phases: number, out: number, texels: number): void;
  alongHalves(row: number, phases: number, out: number, texels: number): void;
  alongSix(row: number, phases: number, out: number, texels: number): void;
  acrossEqual(rows: number, weights: number, taps: number, out: number, floats: number): void;
  acrossPairs(rows: number, weights: number, taps: number, out: number, floats: number): void;
  pad(pairs: number, count: number, bytes: number): void;
  unfilter(type: number, row: number, above: number, step: number, bytes: number): void;
  chooseFilter(row: number, above: number, step: number, bytes: number): number;
  filter(type: number, row: number, above: number, step: number, bytes: number, out: number): void;
  swapBytes(codes: number, bytes: number): void;
  countTokens(block: number, bytes: number, zeros: number, counts: number): void;
  writeTokens(block: number, bytes: number, zeros: number, codes: number, out: number, bit: number): number;
  adler(at: number, bytes: number, sum: number): number;
  decodeBytes(codes: number, step: number, table: number, out: number, stride: number, texels: number): void;
  decodeWords(codes: number, step: number, table: number, out: number, stride: number, texels: number): void;
  decodeQuads(codes: number, out: number, texels: number, sums: number): void;
  weigh(channel: number, alpha: number, stride: number, texels: number): void;
  makeUnit(x: number, y: number, z: number, rebuilt: number, shortest: number, stride: number, texels: number): void;
  sumRow(row: number, stride: number, texels: number, sums: number): void;
  encodeBytes(row: number, stride: number, texels: number, codes: number, channels: number, curves: number): void;
  encodeWords(row: number, stride: number, texels: number, codes: number, channels: number, curves: number): void;
  encodeQuads(row: number, texels: number, codes: number, curves: number): void;
  encodeNormals(
    row: number,
    stride: number,
    texels: number,
    codes: number,
    channels: number,
    x: number,
    y: number,
    z: number,
    shortest: number,
    most: number,
  ): void;
  sumHeld(row: number, stride: number, alpha: number, most: number, wholes: number, texels: number, sums: number): void;
  keepAlpha(alpha: number, stride: number, most: number, values: number, texels: number): void;
  measureLengths(
    row: number,
    stride: number,
    x: number,
    y: number,
    z: number,
    alpha: number,
    lengths: number,
    texels: number,
  ): void;
}

/** The memory as numbers of each kind. Dead once more is taken. */
export interface Views {
  readonly bytes: Uint8Array;
  readonly words: Uint16Array;
  readonly integers: Int32Array;
  readonly addresses: Uint32Array;
  readonly floats: Float32Array;
  readonly doubles: Float64Array;
}

/** The kernels on a memory of their own, taken from its start on and given back all at once. */
export class Machine {
  readonly kernels: Kernels;
  readonly #memory: WebAssembly.Memory;
  #views: Views;
  #top = FIRST_ADDRESS;

  constructor(module: WebAssembly.Module) {
    this.#memory = new WebAssembly.Memory({ initial: 1, maximum: MOST_BYTES / PAGE_BYTES });
    this.kernels = new WebAssembly.Instance(module, { env: { memory: this.#memory } }).exports as unknown as Kernels;
    this.#views = viewsOf(this.#memory.buffer);
  }

  /** Address of `bytes` of memory, a multiple of 64. What is in them is left over from earlier work. Throws RangeError where
   *  there are none. */
  take(bytes: number): number {
    const address = this.#top;
    const top = address + aligned(bytes);
    const missing = top - this.#memory.buffer.byteLength;
    if (missing > 0) {
      this.#memory.grow(Math.ceil(missing / PAGE_BYTES));
      this.#views = viewsOf(this.#memory.buffer);
    }
    this.#top = top;
    return address;
  }

  /** A copy of numbers. */
  keep(numbers: Float32Array | Float64Array | Uint32Array | Uint16Array): number {
    const address = this.take(numbers.byteLength);
    this.views.bytes.set(new Uint8Array(numbers.buffer, numbers.byteOffset, numbers.byteLength), address);
    return address;
  }

  /** All that was taken is free again. */
  giveBack(): void {
    this.#top = FIRST_ADDRESS;
  }

  get views(): Views {
    return this.#views;
  }

  /** Bytes that were taken since all was free. */
  get taken(): number {
    return this.#top - FIRST_ADDRESS;
  }

  /** Bytes of memory, taken or not. */
  get size(): number {
    return this.#memory.buffer.byteLength;
  }
}

/** What `take` takes for a number of bytes. */
export function aligned(bytes: number): number {
  return Math.ceil(bytes / 64) * 64;
}

/** What is taken first has this address, which stands in kernels/decode.ts. 0 is no address. */
export const FIRST_ADDRESS = 64;

const PAGE_BYTES = 65536;

/** The most that one machine may hold: half of what an address reaches. */
export const MOST_BYTES = 2 ** 31;

function viewsOf(buffer: ArrayBuffer): Views {
  return {
    bytes: new Uint8Array(buffer),
    words: new Uint16Array(buffer),
    integers: new Int32Array(buffer),
    addresses: new Uint32Array(buffer),
    floats: new Float32Array(buffer),
    doubles: new Float64Array(buffer),
  };
}
