import { css, html, LitElement } from 'lit';
import { percent } from '../../../core/figures.ts';
import type { AxisFootprint, FootprintAnswer } from '../../../core/proof/want.ts';
import { controls } from '../form/controls.ts';
import { WEIGHT_MINUS, WEIGHT_PLUS } from '../prints/backdrop.ts';
import { t } from '../words/t.ts';

const SIDE = 96;

/** The source texels that make the texel under the cursor, each as strong as its weight; those of negative weight are hatched. */
export class FootprintPlot extends LitElement {
  static override properties = { footprint: { attribute: false }, why: { type: String }, open: { state: true } };
  declare footprint: FootprintAnswer | null;
  /** Why there are no weights, where there are none. */
  declare why: string;
  /** Whether the table is shown: it is made only then. */
  declare open: boolean;

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
    this.open = false;
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
        <details @toggle=${this.#toggle}>
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
                ${Array.from({ length: this.open ? Math.max(x.texels.length, y.texels.length) : 0 }, (_, i) => i).map(
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

  #toggle(event: Event): void {
    this.open = (event.target as HTMLDetailsElement).open;
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
  const [columns, rows] = [x.texels.length, y.texels.length];
  const cell = Math.max(1, Math.floor(side / Math.max(columns, rows)));
  // Where there are more texels than pixels, a pixel shows the middle ones: the rest weighs next to nothing.
  const [width, height] = [Math.min(side, columns), Math.min(side, rows)];
  const [skipX, skipY] = [(columns - width) >> 1, (rows - height) >> 1];
  const image = new ImageData(width, height);
  for (let row = 0, at = 0; row < height; row++) {
    for (let column = 0; column < width; column++, at += 4) {
      const weight = (x.weights[skipX + column] * y.weights[skipY + row]) / most;
      image.data.set(weight > 0 ? WEIGHT_PLUS : WEIGHT_MINUS, at);
      // A square root keeps small weights in sight.
      image.data[at + 3] = Math.sqrt(Math.abs(weight)) * 255;
    }
  }
  const [left, top] = [(side - cell * width) >> 1, (side - cell * height) >> 1];
  const scratch = new OffscreenCanvas(width, height);
  scratch.getContext('2d')!.putImageData(image, 0, 0);
  context.imageSmoothingEnabled = false;
  context.drawImage(scratch, left, top, cell * width, cell * height);
  if (cell < 4) return;
  const [red, green, blue] = WEIGHT_MINUS;
  context.fillStyle = `rgb(${red} ${green} ${blue})`;
  for (let row = 0; row < height; row++) {
    for (let column = 0; column < width; column++) {
      if (x.weights[skipX + column] * y.weights[skipY + row] >= 0) continue;
      for (let i = 0; i < cell; i++) {
        context.fillRect(left + column * cell + i, top + row * cell + cell - 1 - i, 1, 1);
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
