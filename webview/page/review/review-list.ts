import { css, html, nothing } from 'lit';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { t } from '../words/t.ts';
import type { ReviewModel } from './model.ts';
import { harmText, statusWord, verdictWords } from './words.ts';

/** The list of changed textures, most harmful first, in a page that has no editor beside it. */
export class ReviewList extends ModelView<ReviewModel> {
  static override styles = [
    controls,
    css`
      :host {
        display: block;
        max-height: 14em;
        overflow: auto;
        border-bottom: 1px solid var(--proof-line);
      }
      table {
        border-collapse: collapse;
        width: 100%;
      }
      th,
      td {
        text-align: left;
        vertical-align: baseline;
        font-weight: 400;
        padding: 2px 10px;
      }
      thead th {
        color: var(--proof-quiet);
        position: sticky;
        top: 0;
        background: var(--proof-ground);
      }
      tr[aria-current] {
        background: var(--proof-hover);
      }
      tr[aria-current] button {
        font-weight: 700;
      }
      .score {
        text-align: right;
      }
      .harm {
        color: var(--proof-warning);
      }
      th button {
        height: auto;
        min-height: 1.6em;
        padding: 0 4px;
        white-space: normal;
        text-align: left;
        overflow-wrap: anywhere;
      }
    `,
  ];

  override render() {
    const { model } = this;
    const rows = model?.open?.rows ?? null;
    if (model === null || rows === null) return nothing;
    return html`<table aria-label=${t('Changed textures')}>
      <thead>
        <tr>
          <th scope="col" class="score">${t('impact')}</th>
          <th scope="col">${t('change')}</th>
          <th scope="col">${t('texture')}</th>
          <th scope="col">${t('what it does')}</th>
        </tr>
      </thead>
      <tbody>
        ${rows.map(({ path, status, verdict, impact }, index) => {
          const harms = impact.harms.filter(({ name }) => name !== 'unreadable').map(harmText);
          return html`<tr aria-current=${index === model.open!.index ? 'true' : nothing}>
            <td class="number score">${impact.score.toFixed(1)}</td>
            <td>${statusWord(status)}</td>
            <th scope="row"><button class="plain" @click=${() => model.do('go', { index })}>${path}</button></th>
            <td>
              ${harms.map((harm) => html`<span class="harm">${harm}.</span> `)}${verdictWords(verdict)}
            </td>
          </tr>`;
        })}
      </tbody>
    </table>`;
  }
}

customElements.define('review-list', ReviewList);
