import { css, html, LitElement, nothing } from 'lit';
import { controls } from '../form/controls.ts';
import type { PrintStage } from '../prints/print-stage.ts';
import { noteOf } from '../proof/note.ts';
import { SwapHold } from '../proof/swap-hold.ts';
import { t } from '../words/t.ts';
import type { ReviewModel } from './model.ts';
import './review-bar.ts';
import './review-list.ts';
import './review-readings.ts';
import './review-row.ts';
import './review-top.ts';
import './survival-axis.ts';
import type { ReviewPrints } from './review-row.ts';
import type { SideCard } from './side-card.ts';

/** The page of a review: the size axis with what survives of a change, before and after and difference at one size, readings. */
export class ReviewPage extends LitElement {
  static override properties = {
    model: { attribute: false },
    tick: { state: true },
    zoom: { state: true },
    swapped: { state: true },
  };
  declare model: ReviewModel | null;
  declare tick: number;
  declare zoom: number;
  declare swapped: boolean;
  #hold: SwapHold | null = null;
  readonly #changed = (): void => {
    this.tick++;
  };

  static override styles = [
    controls,
    css`
      :host {
        display: grid;
        grid-template-columns: minmax(0, 1fr);
        grid-template-rows: auto auto auto auto minmax(320px, 1fr) auto auto;
        min-height: 100vh;
      }
      .axis {
        border-bottom: 1px solid var(--proof-line);
        padding-top: 4px;
      }
      .note {
        grid-row: 3 / -1;
        display: grid;
        place-content: center;
        justify-items: start;
        gap: 12px;
        padding: 24px;
        max-width: 64ch;
        margin: 0 auto;
        min-height: 50vh;
      }
      .note p {
        margin: 0;
        font-size: 1.05em;
        line-height: 1.5;
      }
      main {
        display: grid;
        min-height: 0;
        min-width: 0;
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
    `,
  ];

  constructor() {
    super();
    this.model = null;
    this.tick = 0;
    this.zoom = 1;
    this.swapped = false;
  }

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

  override render() {
    const { model, tick } = this;
    if (model === null) return nothing;
    return html`
      <review-top .model=${model} .tick=${tick} role="banner"></review-top>
      ${
        model.open?.rows == null
          ? html`<div></div>`
          : html`<review-list .model=${model} .tick=${tick} role="region" aria-label=${t('List')}></review-list>`
      }
      ${model.problem !== null || model.seen === null ? this.#note(model) : this.#review(model)}
    `;
  }

  /** In place of the prints: why there are none. */
  #note(model: ReviewModel) {
    const { problem, review } = model;
    if (problem !== null) {
      const { text, state } = noteOf(problem);
      return html`<main class="note" data-state=${state}>
        <p role="alert">${text}</p>
        <button class="main" @click=${() => model.start()}>${t('Try again')}</button>
      </main>`;
    }
    if (review === null) {
      return html`<main class="note" data-state="loading"><p role="status">${t('Comparing both versions …')}</p></main>`;
    }
    return html`<main class="note" data-state="nothing">
      <p role="alert">${t('Neither version can be shown.')}</p>
      <button class="main" @click=${() => model.start()}>${t('Try again')}</button>
    </main>`;
  }

  #review(model: ReviewModel) {
    const { tick } = this;
    return html`
      <section class="axis" aria-label=${t('Size axis')}>
        <survival-axis .model=${model} .tick=${tick}></survival-axis>
      </section>
      <review-bar
        .model=${model}
        .tick=${tick}
        .zoom=${this.zoom}
        role="region"
        aria-label=${t('View')}
        @swap-hold=${(event: CustomEvent<'down' | 'up'>) => this.#swap(event.detail)}
      ></review-bar>
      <main aria-label=${t('Prints')}>
        <review-prints .model=${model} .tick=${tick} .swapped=${this.swapped}></review-prints>
      </main>
      <review-readings .model=${model} .tick=${tick} role="region" aria-label=${t('Readings')}></review-readings>
      <footer class="foot">${footWords(model).map((each) => html`<span>${each}</span>`)}</footer>
    `;
  }

  override updated(): void {
    this.model?.want();
    // Stages know their own size only after they are laid out.
    requestAnimationFrame(() => {
      const row = this.renderRoot.querySelector<ReviewPrints>('review-prints');
      const cards = [...(row?.renderRoot.querySelectorAll<SideCard>('side-card') ?? [])];
      const [stage] = cards.flatMap((card) => card.renderRoot.querySelector<PrintStage>('print-stage') ?? []);
      if (stage !== undefined) this.zoom = stage.zoom;
    });
  }

  readonly #keys = (event: KeyboardEvent): void => {
    if (event.key.toLowerCase() !== 'x' || event.repeat || event.ctrlKey || event.metaKey || event.altKey) return;
    const [target] = event.composedPath();
    if (target instanceof HTMLInputElement || target instanceof HTMLSelectElement) return;
    if (this.model?.state.compare === 'swap') this.#swap(event.type === 'keydown' ? 'down' : 'up');
  };

  readonly #letGo = (): void => this.#swap('up');

  #swap(which: 'down' | 'up'): void {
    this.#hold ??= new SwapHold((swapped) => {
      this.swapped = swapped;
    });
    this.#hold.press(which, this.model?.open?.preferences.swapDwell ?? 0);
  }
}

customElements.define('review-page', ReviewPage);

function footWords({ open, review }: ReviewModel): readonly string[] {
  const ratio = window.devicePixelRatio;
  const words = [
    ...(open?.remark == null ? [] : [open.remark]),
    t('Codes are shown as sRGB; what they look like depends on the screen.'),
    t('A difference of .020 OKLab is just noticed.'),
  ];
  if (ratio !== 1) words.push(t('One CSS pixel is {ratio} device pixels.', { ratio: Number(ratio.toFixed(3)) }));
  const [before, after] = [review?.before, review?.after];
  if (
    before != null &&
    after != null &&
    (before.extent.width !== after.extent.width || before.extent.height !== after.extent.height)
  ) {
    words.push(t('The smaller version is magnified as a sampler does.'));
  }
  return words;
}
