/** No swap follows another sooner, in milliseconds: three flashes a second are the most that are safe, and a flash is two swaps;
 *  twice that time keeps well clear of it.  [WCAG22, 2.3.1] */
export const LEAST_DWELL = 333;

/** Swaps while something is held, and never by itself. A press or release that comes too soon after a swap takes effect when its
 *  time has come, if it still holds then. */
export class SwapHold {
  readonly #show: (swapped: boolean) => void;
  #wanted = false;
  #shown = false;
  #last = Number.NEGATIVE_INFINITY;
  #waiting: ReturnType<typeof setTimeout> | undefined;

  constructor(show: (swapped: boolean) => void) {
    this.#show = show;
  }

  press(which: 'down' | 'up', dwell: number): void {
    this.#wanted = which === 'down';
    clearTimeout(this.#waiting);
    const wait = this.#last + Math.max(LEAST_DWELL, dwell) - performance.now();
    if (wait <= 0) this.#settle();
    else this.#waiting = setTimeout(() => this.#settle(), wait);
  }

  stop(): void {
    clearTimeout(this.#waiting);
  }

  #settle(): void {
    if (this.#wanted === this.#shown) return;
    this.#shown = this.#wanted;
    this.#last = performance.now();
    this.#show(this.#shown);
  }
}
