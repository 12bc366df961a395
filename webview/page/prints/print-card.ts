import { html, LitElement, nothing } from 'lit';
import { figure } from '../../../core/figures.ts';
import { defaultParams, findKernel, type KernelParam, kernels } from '../../../core/kernel/table.ts';
import type { Slot } from '../../../core/proof/slot.ts';
import type { KernelChoice } from '../../../core/treatment/treatment.ts';
import { controls } from '../form/controls.ts';
import { t } from '../words/t.ts';
import './print-stage.ts';
import { cardStyles } from './print-card.styles.ts';
import type { Scene } from './print-stage.ts';

/** One figure of a print: what it is, and its number with a unit. */
export interface CardFigure {
  readonly name: string;
  readonly text: string;
  readonly over: boolean;
}

export interface CardFacts {
  readonly slot: Slot;
  /** The kernel that makes the image, also of the settings' own print. */
  readonly kernel: KernelChoice;
  readonly selected: boolean;
  readonly scene: Scene;
  readonly figures: readonly CardFigure[];
  /** Words in place of the figures: still being made, or why it cannot be. */
  readonly status: string | null;
  readonly failed: boolean;
  /** What the print changes against the settings beside its kernel. */
  readonly changes: readonly string[];
  /** How its pixels compare with what was built; null where that is not known. */
  readonly built: string | null;
  readonly pixels: string;
  /** Whether there will be two lines of figures. */
  readonly tall: boolean;
}

/** What was done to a print's own controls. */
export type CardAction =
  | { readonly kind: 'select' }
  | { readonly kind: 'remove' }
  | { readonly kind: 'kernel'; readonly kernel: KernelChoice };

/** A print with its name above and its numbers below. */
export class PrintCard extends LitElement {
  static override properties = { facts: { attribute: false } };
  declare facts: CardFacts | null;

  static override styles = [controls, cardStyles];

  constructor() {
    super();
    this.facts = null;
  }

  override render() {
    const { facts } = this;
    if (facts === null) return nothing;
    const { slot, kernel, scene, status, failed, figures, built } = facts;
    return html`
      <header>
        ${slot.kernel === null ? this.#ownName(kernel) : this.#kernelList(slot.kernel)}
        ${slot.kernel === null ? paramTexts(kernel) : this.#paramFields(slot.kernel)}
        ${slot.id === 0 ? html`<span class="badge">${t('settings')}</span>` : nothing}
        ${facts.changes.map((change) => html`<span class="badge">${change}</span>`)}
        <span class="gap"></span>
        ${
          slot.id === 0
            ? nothing
            : html`<button
                class="plain remove"
                aria-label=${t('Remove the print by {kernel}', { kernel: kernel.name })}
                title=${t('Remove')}
                @click=${() => this.#tell({ kind: 'remove' })}
              >
                ×
              </button>`
        }
      </header>
      <print-stage
        .scene=${scene}
        data-made=${status === null ? kernel.name : ''}
        data-pixels=${facts.pixels}
      ></print-stage>
      <footer class=${facts.tall ? 'tall' : ''}>
        ${
          status !== null
            ? html`<span class=${failed ? 'failed' : 'quiet'} role=${failed ? 'alert' : nothing}>${status}</span>`
            : figures.map(
                ({ name, text, over }) =>
                  html`<span class="figure">
                    <span class="quiet">${name}</span> <b class="number ${over ? 'over' : ''}">${text}</b>
                  </span>`,
              )
        }
        ${built === null || status !== null ? nothing : html`<span class="quiet">${built}</span>`}
      </footer>
    `;
  }

  #ownName(kernel: KernelChoice) {
    return html`<button
      class="name"
      aria-pressed=${this.facts!.selected}
      title=${t('The kernel that the settings choose')}
      @click=${() => this.#tell({ kind: 'select' })}
    >
      ${kernel.name}
    </button>`;
  }

  #kernelList(kernel: KernelChoice) {
    return html`<select
      aria-label=${t('Kernel of this print')}
      .value=${kernel.name}
      @change=${(event: Event) => {
        const found = findKernel((event.target as HTMLSelectElement).value)!;
        this.#tell({ kind: 'kernel', kernel: { name: found.name, params: defaultParams(found) } });
      }}
    >
      ${kernels.map(({ name }) => html`<option value=${name} ?selected=${name === kernel.name}>${name}</option>`)}
    </select>`;
  }

  #paramFields(kernel: KernelChoice) {
    const params = findKernel(kernel.name)?.params ?? [];
    return params.map(
      (param) => html`<label class="param">
        ${param.name}
        <input
          class="param-value"
          type="number"
          min=${param.min}
          max=${param.max}
          step=${stepOf(param)}
          .value=${figure(kernel.params[param.name] ?? param.default, 3)}
          @change=${(event: Event) => this.#setParam(kernel, param, event.target as HTMLInputElement)}
        />
      </label>`,
    );
  }

  #setParam(kernel: KernelChoice, param: KernelParam, field: HTMLInputElement): void {
    const typed = Number(field.value);
    const within = Math.min(param.max, Math.max(param.min, Number.isFinite(typed) ? typed : param.default));
    const value = param.allowed === undefined ? within : nearestOf(param.allowed, within);
    field.value = figure(value, 3);
    this.#tell({ kind: 'kernel', kernel: { name: kernel.name, params: { ...kernel.params, [param.name]: value } } });
  }

  #tell(action: CardAction): void {
    this.dispatchEvent(new CustomEvent<CardAction>('card', { detail: action }));
  }
}

customElements.define('print-card', PrintCard);

function paramTexts(kernel: KernelChoice) {
  return Object.entries(kernel.params).map(
    ([name, value]) => html`<span class="param">${name} <span class="number">${figure(value, 3)}</span></span>`,
  );
}

function stepOf(param: KernelParam): number {
  return param.allowed !== undefined ? 0.5 : param.max - param.min > 4 ? 0.5 : 0.05;
}

function nearestOf(values: readonly number[], wanted: number): number {
  return values.reduce((best, each) => (Math.abs(each - wanted) < Math.abs(best - wanted) ? each : best));
}
