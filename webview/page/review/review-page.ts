import { css, html, nothing } from 'lit';
import type { PrintStage } from '../prints/print-stage.ts';
import { pageStyles, WholePage } from '../proof/whole-page.ts';
import { noteOf } from '../state/note.ts';
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
export class ReviewPage extends WholePage<ReviewModel> {
  static override styles = [
    pageStyles,
    css`
      :host {
        grid-template-rows: auto auto auto auto minmax(320px, 1fr) auto auto;
      }
      .note {
        grid-row: 3 / -1;
      }
    `,
  ];

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
        @swap-hold=${(event: CustomEvent<'down' | 'up'>) => this.swap(event.detail)}
      ></review-bar>
      <main aria-label=${t('Prints')}>
        <review-prints .model=${model} .tick=${tick} .swapped=${this.swapped}></review-prints>
      </main>
      <review-readings .model=${model} .tick=${tick} role="region" aria-label=${t('Readings')}></review-readings>
      <footer class="foot">${footWords(model).map((each) => html`<span>${each}</span>`)}</footer>
    `;
  }

  protected override want(model: ReviewModel): void {
    model.want();
  }

  protected override stage(): PrintStage | null {
    const row = this.renderRoot.querySelector<ReviewPrints>('review-prints');
    const cards = [...(row?.renderRoot.querySelectorAll<SideCard>('side-card') ?? [])];
    const [stage] = cards.flatMap((card) => card.renderRoot.querySelector<PrintStage>('print-stage') ?? []);
    return stage ?? null;
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
