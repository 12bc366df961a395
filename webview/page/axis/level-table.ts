import { css, html, nothing } from 'lit';
import { byteText, extentText } from '../../../core/figures.ts';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { copy } from '../readings/copy.ts';
import { csvText } from '../readings/csv.ts';
import { distanceOf } from '../state/lod.ts';
import type { Model } from '../state/model.ts';
import type { Stop } from '../state/scale.ts';
import { meters } from '../words/meters.ts';
import { t } from '../words/t.ts';
import { type Curve, isBeyond } from './curve.ts';
import { curvesOf } from './curves.ts';
import { memoryOf } from './memory.ts';
import { isShipped } from './rows.ts';
import { sightOf } from './sight.ts';

/** The axis as a table: every level and target with its size, its memory and what the curves show of it. */
export class LevelTable extends ModelView<Model> {
  static override styles = [
    controls,
    css`
      :host {
        display: block;
        padding: 0 10px 8px;
      }
      .scroll {
        max-height: 15em;
        overflow: auto;
      }
      table {
        border-collapse: collapse;
      }
      th,
      td {
        text-align: right;
        padding: 1px 14px 1px 0;
        font-weight: 400;
        white-space: nowrap;
      }
      thead th {
        color: var(--proof-quiet);
        position: sticky;
        top: 0;
        background: var(--proof-ground);
      }
      th:first-child {
        text-align: left;
      }
      th button {
        padding: 0 5px;
        height: auto;
        min-height: 1.6em;
      }
      tr[aria-current] th button {
        font-weight: 700;
      }
      .over {
        color: var(--proof-warning);
      }
    `,
  ];

  override render() {
    const { model } = this;
    const seen = model?.seen;
    if (model == null || seen == null) return nothing;
    const { outlook, stops } = model;
    const curves = curvesOf(model);
    return html`
      <div class="scroll" tabindex="0" role="region" aria-label=${t('Table of the size axis')}>
        <table>
          <thead>
            <tr>
              <th scope="col">${t('level or target')}</th>
              <th scope="col">${t('size')}</th>
              <th scope="col">${t('memory')}</th>
              ${outlook === null ? nothing : html`<th scope="col">${t('meters')}</th>`}
              ${curves.map(({ name }) => html`<th scope="col">${name}</th>`)}
              <th scope="col">${t('written')}</th>
            </tr>
          </thead>
          <tbody>
            ${stops.map(
              (
                stop,
              ) => html`<tr aria-current=${stop.kind === seen.stop?.kind && stop.label === seen.stop.label ? 'true' : nothing}>
                <th scope="row">
                  <button class="plain number" @click=${() => model.set({ sight: sightOf(stop) })}>${stop.label}</button>
                </th>
                <td class="number">${extentText(stop.extent)}</td>
                <td class="number">${byteText(memoryOf(model, stop.extent))}</td>
                ${outlook === null ? nothing : html`<td class="number">${meters(distanceOf(stop.lod, outlook))}</td>`}
                ${curves.map((curve) => valueCell(curve, stop))}
                <td>${isWritten(model, stop) ? t('yes') : t('no')}</td>
              </tr>`,
            )}
          </tbody>
        </table>
      </div>
      <button class="plain" aria-label=${t('Copy CSV of the size axis')} @click=${() => copy(model, axisCsv(model, curves))}>
        ${t('Copy CSV')}
      </button>
    `;
  }
}

customElements.define('level-table', LevelTable);

function valueCell(curve: Curve, stop: Stop) {
  const value = valueAt(curve, stop);
  if (value === null) return html`<td></td>`;
  const over = isBeyond(curve, value);
  return html`<td class=${over ? 'number over' : 'number'}>${curve.format(value)}${over ? ' ▲' : ''}</td>`;
}

/** Levels are measured, targets are when they are looked at. */
function valueAt(curve: Curve, stop: Stop): number | null {
  return stop.kind === 'level' ? (curve.points.find(({ lod }) => lod === stop.lod)?.value ?? null) : null;
}

/** Whether a build writes a file of it. */
function isWritten(model: Model, stop: Stop): boolean {
  return stop.kind !== 'typed' && isShipped(model.treatment!, stop);
}

function axisCsv(model: Model, curves: readonly Curve[]): string {
  const { stops, outlook } = model;
  const head = ['level or target', 'width', 'height', 'bytes', 'meters', ...curves.map(({ name }) => name), 'written'];
  const rows = stops.map((stop) => [
    stop.label,
    stop.extent.width,
    stop.extent.height,
    memoryOf(model, stop.extent),
    outlook === null ? '' : Number(distanceOf(stop.lod, outlook).toPrecision(6)),
    ...curves.map((curve) => {
      const value = valueAt(curve, stop);
      return value === null ? '' : Number(value.toPrecision(6));
    }),
    isWritten(model, stop) ? 'yes' : 'no',
  ]);
  return csvText([head, ...rows]);
}
