import { css, html, LitElement } from 'lit';
import { figure } from '../../../core/figures.ts';
import { controls } from '../form/controls.ts';
import type { State } from '../state/state.ts';
import { t } from '../words/t.ts';

/** A disc on which the lamp is moved: its middle is straight above the surface. */
export class LampPad extends LitElement {
  static override properties = { lamp: { attribute: false } };
  declare lamp: State['lamp'];

  static override styles = [
    controls,
    css`
      :host {
        display: inline-flex;
        align-items: center;
        gap: 5px;
      }
      .disc {
        position: relative;
        width: 26px;
        height: 26px;
        border: 1px solid var(--proof-strong-line);
        border-radius: 50%;
        cursor: grab;
        touch-action: none;
      }
      .dot {
        position: absolute;
        width: 8px;
        height: 8px;
        margin: -4px 0 0 -4px;
        border-radius: 50%;
        background: var(--proof-accent);
        left: var(--across);
        top: var(--down);
      }
    `,
  ];

  constructor() {
    super();
    this.lamp = { x: 0, y: 0 };
  }

  override render() {
    const { x, y } = this.lamp;
    return html`<span class="quiet">${t('Lamp')}</span>
      <div
        class="disc"
        role="slider"
        tabindex="0"
        aria-label=${t('Lamp over the surface; arrow keys move it')}
        aria-valuemin="-180"
        aria-valuemax="180"
        aria-valuenow=${Math.round((Math.atan2(y, x) * 180) / Math.PI)}
        aria-valuetext=${t('{x} across, {y} up', { x: figure(x), y: figure(y) })}
        @pointerdown=${this.#press}
        @pointermove=${this.#drag}
        @keydown=${this.#key}
      >
        <div class="dot"></div>
      </div>`;
  }

  override updated(): void {
    this.style.setProperty('--across', `${50 + 42 * this.lamp.x}%`);
    this.style.setProperty('--down', `${50 - 42 * this.lamp.y}%`);
  }

  #press(event: PointerEvent): void {
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
    this.#move(event);
  }

  #drag(event: PointerEvent): void {
    if ((event.currentTarget as Element).hasPointerCapture(event.pointerId)) this.#move(event);
  }

  #move(event: PointerEvent): void {
    const box = (event.currentTarget as Element).getBoundingClientRect();
    const across = ((event.clientX - box.left) / box.width) * 2 - 1;
    this.#set(across, 1 - ((event.clientY - box.top) / box.height) * 2);
  }

  #key(event: KeyboardEvent): void {
    const steps: Readonly<Record<string, readonly [number, number]>> = {
      ArrowLeft: [-0.1, 0],
      ArrowRight: [0.1, 0],
      ArrowUp: [0, 0.1],
      ArrowDown: [0, -0.1],
    };
    const step = steps[event.key];
    if (step === undefined) return;
    event.preventDefault();
    this.#set(this.lamp.x + step[0], this.lamp.y + step[1]);
  }

  #set(x: number, y: number): void {
    const radius = Math.max(1, Math.hypot(x, y));
    this.dispatchEvent(new CustomEvent<State['lamp']>('lamp', { detail: { x: x / radius, y: y / radius } }));
  }
}

customElements.define('lamp-pad', LampPad);
