import { css, html, nothing } from 'lit';
import { light, percent } from '../../../core/figures.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { JUST_SEEN } from '../../../core/review/lab.ts';
import type { PairAnswer } from '../../../core/review/want.ts';
import { HIDDEN_MARK, MARK_SCALE } from '../../../core/review/want.ts';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { t } from '../words/t.ts';
import type { ReviewModel } from './model.ts';
import { cursorOf } from './review-row.ts';
import { distance, type SizeStop, sightOf } from './sizes.ts';
import { sizeName } from './survival-axis.ts';

/** The texel under the cursor on both sides, and the table of all sizes: the twin of the axis. */
export class ReviewReadings extends ModelView<ReviewModel> {
  static override styles = [
    controls,
    css`
      :host {
        display: grid;
        grid-template-columns: minmax(16em, auto) minmax(0, 1fr);
        border-top: 1px solid var(--proof-line);
        max-height: 17em;
        min-width: 0;
      }
      section {
        padding: 6px 10px;
        overflow: auto;
        border-right: 1px solid var(--proof-line);
      }
      .texel {
        display: grid;
        grid-template-columns: auto 1fr;
        gap: 2px 12px;
        margin: 4px 0 0;
        align-content: start;
      }
      dd {
        margin: 0;
      }
      table {
        border-collapse: collapse;
        margin-top: 4px;
      }
      th,
      td {
        text-align: right;
        padding: 1px 10px 1px 0;
        font-weight: 400;
        white-space: nowrap;
      }
      th:first-child {
        text-align: left;
      }
      thead th {
        color: var(--proof-quiet);
      }
      tr[aria-current] th {
        font-weight: 700;
      }
      th button {
        padding: 0 4px;
        height: auto;
        min-height: 1.6em;
      }
      .over::after {
        content: ' \u25b2';
        font-size: 0.75em;
      }
      .over {
        color: var(--proof-warning);
      }
      @media (max-width: 560px) {
        :host {
          grid-template-columns: minmax(0, 1fr);
          max-height: none;
        }
        section {
          border-right: 0;
        }
      }
    `,
  ];

  override render() {
    const { model } = this;
    const seen = model?.seen ?? null;
    if (model === null || seen === null) return nothing;
    return html`
      <section tabindex="0" aria-label=${t('Texel')}>${this.#texel(model, seen)}</section>
      <section tabindex="0" aria-label=${t('Sizes')}>${this.#table(model, seen)}</section>
    `;
  }

  #texel(model: ReviewModel, seen: SizeStop) {
    const { x, y } = cursorOf(model);
    const pair = model.pair(seen);
    const made = pair === null || 'problem' in pair ? null : pair;
    const isWorst = model.state.cursor === null && seen.size.difference !== null && seen.size.difference.texels > 0;
    return html`
      <span class="heading">${t('Texel')}</span>
      <dl class="texel number">
        <dt class="quiet">${isWorst ? t('where it is worst') : t('place')}</dt>
        <dd>${x}, ${y}</dd>
        <dt class="quiet">${t('before')}</dt>
        <dd>${codesAt(made?.before?.picture ?? null, x, y)}</dd>
        <dt class="quiet">${t('after')}</dt>
        <dd>${codesAt(made?.after?.picture ?? null, x, y)}</dd>
        <dt class="quiet">${t('difference')}</dt>
        <dd>${differenceAt(made, x, y)}</dd>
      </dl>
    `;
  }

  #table(model: ReviewModel, seen: SizeStop) {
    const { stops } = model;
    const has = (of: (stop: SizeStop) => unknown): boolean => stops.some((stop) => of(stop) != null);
    const sides = (stop: SizeStop) => [stop.size.before, stop.size.after];
    const columns: readonly Column[] = [
      ...(has(({ size }) => size.difference) ? DIFFERENCES : []),
      ...(has((stop) => sides(stop).find((side) => side?.coverage != null)) ? [COVERAGE] : []),
      ...(has((stop) => sides(stop).find((side) => side?.luminance != null)) ? [LUMINANCE] : []),
      ...(has((stop) => sides(stop).find((side) => side?.normalLength != null)) ? [LENGTH] : []),
    ];
    return html`
      <span class="heading">${t('Sizes')}</span>
      <table>
        <thead>
          <tr>
            <th scope="col">${t('size')}</th>
            <th scope="col">${t('texels')}</th>
            ${columns.map(({ name }) => html`<th scope="col">${name()}</th>`)}
          </tr>
        </thead>
        <tbody>
          ${stops.map(
            (stop) => html`<tr aria-current=${stop === seen ? 'true' : nothing}>
              <th scope="row">
                <button class="plain" @click=${() => model.set({ sight: sightOf(stop), cursor: null })}>
                  ${sizeName(stop)}
                </button>
              </th>
              <td class="number">${stop.extent.width}×${stop.extent.height}</td>
              ${columns.map((column) => html`<td class="number ${column.over(stop) ? 'over' : ''}">${column.text(stop)}</td>`)}
            </tr>`,
          )}
        </tbody>
      </table>
    `;
  }
}

customElements.define('review-readings', ReviewReadings);

interface Column {
  readonly name: () => string;
  text(stop: SizeStop): string;
  over(stop: SizeStop): boolean;
}

const DIFFERENCES: readonly Column[] = [
  {
    name: () => t('worst difference'),
    text: ({ size }) => (size.difference === null ? '' : distance(size.difference.worst)),
    over: ({ size }) => size.difference !== null && size.difference.worst >= JUST_SEEN,
  },
  {
    name: () => t('seen'),
    text: ({ size }) => (size.difference === null ? '' : percent(size.difference.seen)),
    over: () => false,
  },
];

const COVERAGE = pairColumn(
  () => t('coverage'),
  (side) => side.coverage,
  percent,
);
const LUMINANCE = pairColumn(
  () => t('luminance'),
  (side) => side.luminance,
  light,
);
const LENGTH = pairColumn(
  () => t('normal length'),
  (side) => side.normalLength,
  light,
);

function pairColumn(
  name: () => string,
  of: (side: NonNullable<SizeStop['size']['before']>) => number | null,
  format: (value: number) => string,
): Column {
  return {
    name,
    text: ({ size: { before, after } }) => {
      const [was, is] = [before && of(before), after && of(after)].map((each) => (each === null ? '–' : format(each)));
      return was === is ? was : `${was} → ${is}`;
    },
    over: () => false,
  };
}

function codesAt(picture: Picture | null, x: number, y: number): string {
  if (picture === null) return '–';
  const { extent, channels, codes } = picture;
  if (x >= extent.width || y >= extent.height) return '–';
  const at = (y * extent.width + x) * channels;
  return Array.from(codes.subarray(at, at + channels)).join(' ');
}

function differenceAt(pair: PairAnswer | null, x: number, y: number): string {
  if (pair?.marks == null) return '–';
  const { width } = (pair.after ?? pair.before)!.picture.extent;
  const mark = pair.marks[y * width + x];
  if (mark === HIDDEN_MARK) return t('only where alpha is 0');
  return mark === 0 ? t('none') : distance(mark / MARK_SCALE);
}
