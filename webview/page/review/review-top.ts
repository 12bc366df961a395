import { css, html, nothing } from 'lit';
import { byteText } from '../../../core/figures.ts';
import { say } from '../../../core/problem.ts';
import { describeFile } from '../../../core/review/describe.ts';
import type { Review } from '../../../core/review/review.ts';
import { seenAt } from '../../../core/review/visible.ts';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { t } from '../words/t.ts';
import type { ReviewModel } from './model.ts';
import { harmText, statusWord, verdictWords } from './words.ts';

/** What changed, what it does, and the way to the next texture. */
export class ReviewTop extends ModelView<ReviewModel> {
  static override styles = [
    controls,
    css`
      :host {
        display: block;
        padding: 6px 10px;
        border-bottom: 1px solid var(--proof-line);
      }
      .line {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 4px 14px;
      }
      h1 {
        margin: 0;
        font-size: 1.1em;
        font-weight: 600;
        overflow-wrap: anywhere;
      }
      p {
        margin: 4px 0 0;
      }
      .gap {
        flex: 1;
      }
      .group {
        display: inline-flex;
        gap: 4px;
        flex-wrap: wrap;
        align-items: center;
      }
      .harm {
        color: var(--proof-warning);
        font-weight: 600;
      }
      .problem {
        color: var(--proof-warning);
      }
    `,
  ];

  override render() {
    const { model } = this;
    const open = model?.open;
    if (model == null || open == null) return html`<h1>${t('Review')}</h1>`;
    const { review } = model;
    return html`
      <div class="line">
        <h1>${open.path}</h1>
        <span class="quiet">${statusWord(open.status)}</span>
        ${open.oldPath === open.path ? nothing : html`<span class="quiet">${t('was {path}', { path: open.oldPath })}</span>`}
        <span class="gap"></span>
        ${this.#way(model)}
      </div>
      ${review === null ? nothing : this.#verdict(review)}
      ${open.problems.map((problem) => html`<p class="problem">${say(problem)}</p>`)}
      ${open.manifest === 'stale' ? html`<p class="problem">${t('Its manifest is stale: build again.')}</p>` : nothing}
    `;
  }

  #way(model: ReviewModel) {
    const { index, count, looked, lookedAt, abilities } = model.open!;
    const go = (by: number) => model.do('go', { index: (index + by + count) % count });
    return html`
      <span class="group">
        <button ?disabled=${count < 2} @click=${() => go(-1)}>${t('Previous')}</button>
        <span class="number" role="status">${t('{number} of {count}', { number: index + 1, count })}</span>
        <button ?disabled=${count < 2} @click=${() => go(1)}>${t('Next')}</button>
      </span>
      ${
        abilities.look === null
          ? nothing
          : html`<button
              aria-pressed=${looked === 'yes'}
              title=${t('{looked} of {count} looked at', { looked: lookedAt, count })}
              @click=${() => model.do('look', { looked: looked === 'yes' ? 'no' : 'yes' })}
            >
              ${t('Looked at')}
            </button>`
      }
      ${
        abilities.proof === null
          ? nothing
          : html`<button @click=${() => model.do('proof', null)}>${t('Open proof')}</button>`
      }
    `;
  }

  #verdict(review: Review) {
    const { impact, verdict, sizes, before, after } = review;
    const harms = impact.harms.filter(({ name }) => name !== 'unreadable').map(harmText);
    const where = seenAt(sizes);
    const files = [before, after].flatMap((each) =>
      each === null ? [] : [`${describeFile(each)}, ${byteText(each.fileBytes)}`],
    );
    return html`
      ${harms.length === 0 ? nothing : html`<p class="harm">${t('Harm: {harms}.', { harms: harms.join('; ') })}</p>`}
      <p data-verdict=${verdict.kind}>
        ${verdictWords(verdict)} ${where === '' ? nothing : t('Seen at {sizes}.', { sizes: where })}
      </p>
      <p class="quiet">${[...new Set(files)].join(' → ')}</p>
    `;
  }
}

customElements.define('review-top', ReviewTop);
