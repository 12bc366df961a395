import { css, LitElement, type PropertyDeclarations } from 'lit';
import { controls } from '../form/controls.ts';
import type { PrintStage } from '../prints/print-stage.ts';
import { SwapHold } from '../state/swap-hold.ts';

/** What a page shows: it tells by `change` that something in it is another. */
export interface WholeModel extends EventTarget {
  readonly state: { readonly compare: 'beside' | 'divider' | 'swap' };
  readonly open: { readonly preferences: { readonly swapDwell: number } } | null;
}

/** What the pages of a proof and of a review share: they follow their model, tell their parts by a tick that it moved, know how large
 *  texels are shown, and swap while x is held. */
export abstract class WholePage<Model extends WholeModel> extends LitElement {
  static override properties: PropertyDeclarations = {
    model: { attribute: false },
    tick: { state: true },
    zoom: { state: true },
    swapped: { state: true },
  };
  declare model: Model | null;
  declare tick: number;
  /** Device pixels a texel, as shown. */
  declare zoom: number;
  declare swapped: boolean;
  #hold: SwapHold | null = null;
  readonly #changed = (): void => {
    this.tick++;
  };

  constructor() {
    super();
    this.model = null;
    this.tick = 0;
    this.zoom = 1;
    this.swapped = false;
  }

  /** Says what the page needs computed. */
  protected abstract want(model: Model): void;

  /** The first print's stage, null where none stands. */
  protected abstract stage(): PrintStage | null;

  override connectedCallback(): void {
    super.connectedCallback();
    this.model?.addEventListener('change', this.#changed);
    window.addEventListener('keydown', this.#keys);
    window.addEventListener('keyup', this.#keys);
    window.addEventListener('blur', this.#letGo);
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback();
    this.model?.removeEventListener('change', this.#changed);
    window.removeEventListener('keydown', this.#keys);
    window.removeEventListener('keyup', this.#keys);
    window.removeEventListener('blur', this.#letGo);
    this.#hold?.stop();
  }

  override updated(): void {
    if (this.model === null) return;
    this.want(this.model);
    // Stages know their own size only after they are laid out.
    requestAnimationFrame(() => {
      const stage = this.stage();
      if (stage !== null) this.zoom = stage.zoom;
    });
  }

  protected swap(which: 'down' | 'up'): void {
    this.#hold ??= new SwapHold((swapped) => {
      this.swapped = swapped;
    });
    this.#hold.press(which, this.model?.open?.preferences.swapDwell ?? 0);
  }

  readonly #keys = (event: KeyboardEvent): void => {
    if (event.key.toLowerCase() !== 'x' || event.repeat || event.ctrlKey || event.metaKey || event.altKey) return;
    const [target] = event.composedPath();
    if (target instanceof HTMLInputElement || target instanceof HTMLSelectElement) return;
    if (this.model?.state.compare === 'swap') this.swap(event.type === 'keydown' ? 'down' : 'up');
  };

  readonly #letGo = (): void => this.swap('up');
}

export const pageStyles = [
  controls,
  css`
    :host {
      display: grid;
      grid-template-columns: minmax(0, 1fr);
      min-height: 100vh;
    }
    .axis {
      border-bottom: 1px solid var(--proof-line);
      padding-top: 4px;
    }
    .note {
      display: grid;
      place-content: center;
      justify-items: start;
      gap: 12px;
      padding: 24px;
      max-width: 64ch;
      margin: 0 auto;
    }
    .note p {
      margin: 0;
      font-size: 1.05em;
      line-height: 1.5;
    }
    .foot {
      padding: 3px 10px 5px;
      border-top: 1px solid var(--proof-line);
      color: var(--proof-quiet);
      font-size: 0.92em;
      display: flex;
      flex-wrap: wrap;
      gap: 0 18px;
    }
    main {
      display: grid;
      min-height: 0;
      min-width: 0;
    }
    main.note {
      min-height: 50vh;
    }
  `,
];
