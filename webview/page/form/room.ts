import type { LitElement, ReactiveController } from 'lit';

/** How wide an element is that draws to its own width: it is drawn anew when that changes. */
export class Room implements ReactiveController {
  /** CSS pixels; 0 before it is laid out. */
  width = 0;
  readonly #host: LitElement;
  readonly #observer = new ResizeObserver(([entry]) => {
    if (entry.contentRect.width === this.width) return;
    this.width = entry.contentRect.width;
    this.#host.requestUpdate();
  });

  constructor(host: LitElement) {
    this.#host = host;
    host.addController(this);
  }

  hostConnected(): void {
    this.#observer.observe(this.#host);
  }

  hostDisconnected(): void {
    this.#observer.disconnect();
  }
}
