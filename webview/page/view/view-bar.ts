import { css, html, LitElement, nothing } from 'lit';
import { kernels } from '../../../core/kernel/table.ts';
import { controls } from '../form/controls.ts';
import { DIFFERENCE_RAMP, SIGNED_RAMP } from '../prints/backdrop.ts';
import { ZOOMS } from '../prints/frame.ts';
import { addPrint } from '../prints/print-row.ts';
import { CODE_SCALE, OKLAB_SCALE } from '../prints/view.ts';
import type { Model } from '../proof/model.ts';
import type { Show, State } from '../proof/state.ts';
import { t } from '../words/t.ts';
import './lamp-pad.ts';

/** How prints are looked at: the view, what stands behind, how texels are magnified, what is compared. */
export class ViewBar extends LitElement {
  static override properties = { model: { attribute: false }, tick: { type: Number }, zoom: { type: Number } };
  declare model: Model | null;
  declare tick: number;
  /** Device pixels a texel, as shown. */
  declare zoom: number;

  static override styles = [
    controls,
    css`
      :host {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 4px 12px;
        padding: 4px 10px;
        border-bottom: 1px solid var(--proof-line);
      }
      .gap {
        flex: 1;
      }
      .group {
        display: inline-flex;
        align-items: center;
        gap: 4px;
      }
      .step {
        width: 1.7em;
        padding: 0;
      }
      .zoom {
        min-width: 2.9em;
        text-align: center;
      }
      canvas {
        width: 96px;
        height: 10px;
        border: 1px solid var(--proof-line);
      }
    `,
  ];

  constructor() {
    super();
    this.model = null;
    this.tick = 0;
    this.zoom = 1;
  }

  override render() {
    const { model } = this;
    if (model === null || model.seen === null) return nothing;
    const { state } = model;
    return html`
      <span class="heading">${t('Prints')}</span>
      ${this.#choice(t('View'), state.show, viewsOf(model), (show) => model.set({ show }))}
      ${state.show === 'difference' ? this.#difference(model) : nothing}
      ${
        state.show === 'lit'
          ? html`<lamp-pad
              .lamp=${state.lamp}
              @lamp=${(event: CustomEvent<State['lamp']>) => model.set({ lamp: event.detail })}
            ></lamp-pad>`
          : nothing
      }
      ${state.show === 'overshoot' ? html`<span class="quiet">${t('/ above, \\ below, × clipped')}</span>` : nothing}
      ${
        showsBackdropChoice(model)
          ? this.#choice(t('Backdrop'), state.backdrop, backdropNames(), (backdrop) => model.set({ backdrop }))
          : nothing
      }
      ${this.#choice(t('Texels'), state.magnify, magnifyNames(), (magnify) => model.set({ magnify }))}
      <button
        aria-pressed=${state.tiles}
        title=${t('Nine copies, as a repeating surface shows them')}
        @click=${() => model.set({ tiles: !state.tiles })}
      >
        3×3
      </button>
      ${this.#choice(t('Compare'), state.compare, compareNames(), (compare) => model.set({ compare }))}
      ${
        state.compare === 'beside'
          ? nothing
          : this.#choice(t('with'), state.partner, againstNames(), (partner) => model.set({ partner }))
      }
      ${
        state.compare === 'swap'
          ? html`<button
              title=${t('Hold the button, or the key X')}
              @pointerdown=${() => this.#hold('down')}
              @pointerup=${() => this.#hold('up')}
              @pointerleave=${() => this.#hold('up')}
              @keydown=${(event: KeyboardEvent) => isPress(event) && this.#hold('down')}
              @keyup=${(event: KeyboardEvent) => isPress(event) && this.#hold('up')}
              @blur=${() => this.#hold('up')}
            >
              ${t('Hold to swap')} (X)
            </button>`
          : nothing
      }
      <span class="gap"></span>
      ${this.#zoomButtons(model)}
      <select
        aria-label=${t('Add a print by a kernel')}
        @change=${(event: Event) => {
          const list = event.target as HTMLSelectElement;
          addPrint(model, list.value);
          list.value = '';
        }}
      >
        <option value="" selected disabled>${t('+ kernel')}</option>
        ${kernels.map(({ name }) => html`<option value=${name}>${name}</option>`)}
      </select>
    `;
  }

  #difference(model: Model) {
    const { metric, against } = model.state;
    const channels = (model.header?.channels ?? 3) >= 3 ? ['r', 'g', 'b', 'a'] : ['r', 'a'];
    const metrics = [['oklab', t('OKLab distance')], ...channels.map((each) => [each, each.toUpperCase()])];
    const most = metric === 'oklab' ? OKLAB_SCALE.toFixed(2) : `+${CODE_SCALE}`;
    return html`
      ${this.#choice(t('from'), against, againstNames(), (next) => model.set({ against: next }))}
      ${this.#choice(t('in'), metric, metrics as [State['metric'], string][], (next) => model.set({ metric: next }))}
      <span class="group number quiet">
        ${metric === 'oklab' ? '0' : `−${CODE_SCALE}`}
        <canvas width="96" height="1" data-ramp=${metric === 'oklab' ? 'oklab' : 'signed'} aria-hidden="true"></canvas>
        ${most}
      </span>
    `;
  }

  #zoomButtons(model: Model) {
    const { zoom } = this;
    const step = (next: number | undefined) => next !== undefined && model.set({ zoom: next });
    return html`<span class="group" role="group" aria-label=${t('Zoom')}>
      <button
        class="step"
        aria-label=${t('Smaller')}
        ?disabled=${zoom <= ZOOMS[0]}
        @click=${() => step([...ZOOMS].reverse().find((each) => each < zoom))}
      >
        −
      </button>
      <span class="number zoom" title=${t('Device pixels a texel')}>${zoom}:1</span>
      <button
        class="step"
        aria-label=${t('Larger')}
        ?disabled=${zoom >= ZOOMS[ZOOMS.length - 1]}
        @click=${() => step(ZOOMS.find((each) => each > zoom))}
      >
        +
      </button>
      <button aria-pressed=${model.state.zoom === null} @click=${() => model.set({ zoom: null })}>${t('Fit')}</button>
      <button
        aria-pressed=${model.state.zoom === 1}
        title=${t('One texel a device pixel')}
        @click=${() => model.set({ zoom: 1 })}
      >
        ${t('True size')}
      </button>
    </span>`;
  }

  #choice<T extends string>(
    name: string,
    value: T,
    choices: readonly (readonly [T, string])[],
    choose: (value: T) => void,
  ) {
    return html`<label>
      <span class="quiet">${name}</span>
      <select .value=${value} @change=${(event: Event) => choose((event.target as HTMLSelectElement).value as T)}>
        ${choices.map(([each, text]) => html`<option value=${each} ?selected=${each === value}>${text}</option>`)}
      </select>
    </label>`;
  }

  #hold(which: 'down' | 'up'): void {
    this.dispatchEvent(new CustomEvent('swap-hold', { detail: which, bubbles: true, composed: true }));
  }

  override updated(): void {
    for (const canvas of this.renderRoot.querySelectorAll<HTMLCanvasElement>('canvas[data-ramp]')) {
      drawRamp(canvas, canvas.dataset.ramp === 'oklab' ? DIFFERENCE_RAMP : SIGNED_RAMP);
    }
  }
}

customElements.define('view-bar', ViewBar);

const backdropNames = () =>
  [
    ['checker', t('checker')],
    ['black', t('black')],
    ['gray', t('gray')],
    ['white', t('white')],
  ] as const;

const magnifyNames = () =>
  [
    ['nearest', t('crisp')],
    ['bilinear', t('bilinear')],
  ] as const;

const compareNames = () =>
  [
    ['beside', t('side by side')],
    ['divider', t('divider')],
    ['swap', t('swap')],
  ] as const;

const againstNames = () =>
  [
    ['source', t('source, area mean')],
    ['settings', t('settings’ print')],
  ] as const;

function viewsOf(model: Model): readonly (readonly [Show, string])[] {
  const { header, treatment } = model;
  const channels = header?.channels ?? 3;
  const hasAlpha = channels % 2 === 0;
  const letters: readonly Show[] = channels >= 3 ? ['r', 'g', 'b'] : [];
  const normal = treatment?.content === 'normal' || Object.values(treatment?.channels ?? {}).includes('normal');
  return [
    ['color', treatment?.content === 'color' ? t('color') : t('codes')],
    ...(normal ? ([['lit', t('lit by a lamp')]] as const) : []),
    ...(treatment?.alpha.use === 'mask' && hasAlpha ? ([['mask', t('mask at cutoff')]] as const) : []),
    ...(hasAlpha
      ? ([
          ['a', t('alpha')],
          ['bare', t('color without alpha')],
        ] as const)
      : []),
    ...letters.map((each) => [each, t('channel {letter}', { letter: each })] as const),
    ['overshoot', t('overshoot')],
    ['difference', t('difference')],
  ];
}

function showsBackdropChoice(model: Model): boolean {
  const { show } = model.state;
  return (show === 'color' || show === 'mask') && (model.header?.channels ?? 3) % 2 === 0;
}

function isPress(event: KeyboardEvent): boolean {
  return (event.key === ' ' || event.key === 'Enter') && !event.repeat;
}

function drawRamp(canvas: HTMLCanvasElement, ramp: typeof DIFFERENCE_RAMP): void {
  const context = canvas.getContext('2d');
  if (context === null) return;
  const gradient = context.createLinearGradient(0, 0, canvas.width, 0);
  ramp.forEach((color, i) => {
    gradient.addColorStop(i / (ramp.length - 1), `rgb(${color.join(' ')})`);
  });
  context.fillStyle = gradient;
  context.fillRect(0, 0, canvas.width, 1);
}
