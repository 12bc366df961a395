import { css, html, LitElement } from 'lit';
import type { AxisFootprint, FootprintAnswer } from '../../../core/proof/want.ts';
import { controls } from '../form/controls.ts';
import { WEIGHT_MINUS, WEIGHT_PLUS } from '../prints/backdrop.ts';
import { percent } from '../words/figures.ts';
import { t } from '../words/t.ts';

const SIDE = 96;

/** The source texels that make the texel under the cursor, each as strong as its weight; those of negative weight are hatched. */
export class FootprintPlot extends LitElement {
  static override properties = { footprint: { attribute: false }, why: { type: String } };
  declare footprint: FootprintAnswer | null;
  /** Why there are no weights, where there are none. */
  declare why: string;

  static override styles = [
    controls,
    css`
      :host {
        display: grid;
        grid-template-columns: ${SIDE}px 1fr;
        gap: 10px;
        align-items: start;
      }
      canvas {
        width: ${SIDE}px;
        height: ${SIDE}px;
        border: 1px solid var(--proof-line);
        background: var(--proof-panel);
      }
      p {
        margin: 0 0 4px;
      }
      table {
        border-collapse: collapse;
      }
      th,
      td {
        font-weight: 400;
        text-align: right;
        padding: 0 6px 0 0;
      }
      .scroll {
        max-height: 140px;
        overflow: auto;
      }
    `,
  ];

  constructor() {
    super();
    this.footprint = null;
    this.why = '';
  }

  override render() {
    const axes = this.footprint?.axes ?? null;
    if (axes === null) {
      return html`<canvas width=${SIDE} height=${SIDE} aria-hidden="true"></canvas>
        <p class="quiet">${this.footprint === null ? '' : this.why}</p>`;
    }
    const { x, y } = axes;
    const negative = negativeShare(x, y);
    return html`<canvas aria-hidden="true"></canvas>
      <div>
        <p>
          <span class="number">${x.texels.length} × ${y.texels.length}</span>
          <span class="quiet">${t('texels of the source')}</span>
        </p>
        <p class="quiet number">x ${rangeOf(x)}<br />y ${rangeOf(y)}</p>
        <p>
          ${
            negative === 0
              ? html`<span class="quiet">${t('no negative weight')}</span>`
              : html`<span class="number">${percent(negative)}</span> <span class="quiet">${t('negative weight')}</span>`
          }
        </p>
        <details>
          <summary>${t('Weights')}</summary>
          <div class="scroll" tabindex="0" role="region" aria-label=${t('Weights by axis')}>
            <table class="number">
              <thead>
                <tr>
                  <th scope="col">x</th>
                  <th scope="col">${t('weight')}</th>
                  <th scope="col">y</th>
                  <th scope="col">${t('weight')}</th>
                </tr>
              </thead>
              <tbody>
                ${Array.from({ length: Math.max(x.texels.length, y.texels.length) }, (_, i) => i).map(
                  (i) => html`<tr>
                    ${[x, y].map((axis) =>
                      axis.texels[i] === undefined
                        ? html`<td></td>
                            <td></td>`
                        : html`<td>${axis.texels[i]}</td>
                            <td>${axis.weights[i].toFixed(5)}</td>`,
                    )}
                  </tr>`,
                )}
              </tbody>
            </table>
          </div>
        </details>
      </div>`;
  }

  override updated(): void {
    const canvas = this.renderRoot.querySelector('canvas');
    const axes = this.footprint?.axes ?? null;
    if (canvas === null) return;
    if (axes === null) canvas.getContext('2d')?.clearRect(0, 0, canvas.width, canvas.height);
    else drawFootprint(canvas, axes.x, axes.y);
  }
}

customElements.define('footprint-plot', FootprintPlot);

function drawFootprint(canvas: HTMLCanvasElement, x: AxisFootprint, y: AxisFootprint): void {
  const ratio = window.devicePixelRatio;
  const side = Math.round(SIDE * ratio);
  canvas.width = canvas.height = side;
  const context = canvas.getContext('2d');
  if (context === null) return;
  const most = Math.max(...x.weights.map(Math.abs)) * Math.max(...y.weights.map(Math.abs));
  const cell = Math.max(1, Math.floor(side / Math.max(x.texels.length, y.texels.length)));
  const left = Math.floor((side - cell * x.texels.length) / 2);
  const top = Math.floor((side - cell * y.texels.length) / 2);
  for (let row = 0; row < y.texels.length; row++) {
    for (let column = 0; column < x.texels.length; column++) {
      const weight = (x.weights[column] * y.weights[row]) / most;
      if (weight === 0) continue;
      const [red, green, blue] = weight > 0 ? WEIGHT_PLUS : WEIGHT_MINUS;
      // A square root keeps small weights in sight.
      context.fillStyle = `rgb(${red} ${green} ${blue} / ${Math.sqrt(Math.abs(weight))})`;
      const [at, down] = [left + column * cell, top + row * cell];
      context.fillRect(at, down, cell, cell);
      if (weight < 0 && cell >= 4) {
        for (let i = 0; i < cell; i++) context.fillRect(at + i, down + cell - 1 - i, 1, 1);
      }
    }
  }
}

/** Negative weight as a share of all positive weight. */
function negativeShare(x: AxisFootprint, y: AxisFootprint): number {
  const sums = (axis: AxisFootprint): readonly [plus: number, minus: number] => {
    const plus = axis.weights.reduce((sum, weight) => sum + Math.max(0, weight), 0);
    return [plus, plus - axis.weights.reduce((sum, weight) => sum + weight, 0)];
  };
  const [[plusX, minusX], [plusY, minusY]] = [sums(x), sums(y)];
  const minus = plusX * minusY + minusX * plusY;
  const share = minus / (plusX * plusY + minusX * minusY);
  return share < 1e-6 ? 0 : share;
}

function rangeOf({ texels }: AxisFootprint): string {
  return texels.length === 0 ? '' : `${texels[0]}…${texels[texels.length - 1]}`;
}
