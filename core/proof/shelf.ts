/** Keeps what was last used, up to a number of bytes; the newest stays even where it alone is larger. */
export class Shelf<T> {
  readonly #most: number;
  readonly #sizeOf: (item: T) => number;
  readonly #items = new Map<string, T>();
  #bytes = 0;

  constructor(most: number, sizeOf: (item: T) => number) {
    this.#most = most;
    this.#sizeOf = sizeOf;
  }

  get(key: string): T | undefined {
    const item = this.#items.get(key);
    if (item !== undefined) {
      this.#items.delete(key);
      this.#items.set(key, item);
    }
    return item;
  }

  put(key: string, item: T): void {
    this.#drop(key);
    this.#items.set(key, item);
    this.#bytes += this.#sizeOf(item);
    for (const oldest of this.#items.keys()) {
      if (this.#bytes <= this.#most || oldest === key) break;
      this.#drop(oldest);
    }
  }

  clear(): void {
    this.#items.clear();
    this.#bytes = 0;
  }

  #drop(key: string): void {
    const item = this.#items.get(key);
    if (item === undefined) return;
    this.#items.delete(key);
    this.#bytes -= this.#sizeOf(item);
  }
}
