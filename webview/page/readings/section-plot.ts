import { css, html, LitElement, nothing, svg } from 'lit';
import { figure } from '../../../core/figures.ts';
import { controls } from '../form/controls.ts';
import { Room } from '../form/room.ts';
import { textScale } from '../form/text-scale.ts';
import { t } from '../words/t.ts';
import { type Section, sectionRows, sectionTracks, type Track } from './section.ts';

const HEIGHT = 112;
/** Room for the numbers at the left, at the usual size of text. */
const LEFT = 30;
const BOTTOM = 14;

/** A plot of a cross-section with a table of the same numbers. */
export class SectionPlot extends LitElement {
  static override properties = {
    section: { attribute: false },
    cursor: { type: Number },
    open: { state: true },
  };
  declare section: Section | null;
  /** Share of the line at which the cursor stands. */
  declare cursor: number;
  /** Whether the table is shown: it is made only then. */
  declare open: boolean;
  readonly #room = new Room(this);

  static override styles = [
    controls,
    css`
      :host {
        display: block;
        min-width: 0;
      }
      svg {
        display: block;
        width: 100%;
        height: ${HEIGHT}px;
        font-family: var(--proof-mono);
        font-size: calc(var(--proof-font-size) * 0.77);
        overflow: visible;
      }
      text {
        fill: var(--proof-quiet);
        text-anchor: end;
      }
      .rule {
        stroke: var(--proof-line);
        opacity: 0.5;
      }
      polyline {
        fill: none;
        stroke: var(--proof-curve);
        stroke-width: 1;
        stroke-linejoin: round;
      }
      .source {
        stroke: var(--proof-quiet);
        opacity: 0.55;
        stroke-width: 1;
      }
      .chosen {
        stroke: var(--proof-accent);
        stroke-width: 1.75;
      }
      .mark {
        fill: var(--proof-warning);
      }
      .here {
        stroke: var(--proof-strong-line);
        stroke-dasharray: 2 3;
      }
      .legend {
        display: flex;
        flex-wrap: wrap;
        gap: 2px 12px;
        padding-left: calc(var(--proof-font-size) * ${LEFT / 13});
      }
      .legend svg {
        display: inline-block;
        width: 22px;
        height: 8px;
        margin-right: 4px;
      }
      .scroll {
        max-height: 180px;
        overflow: auto;
      }
      table {
        border-collapse: collapse;
        width: 100%;
      }
      th,
      td {
        text-align: right;
        padding: 1px 6px;
        font-weight: 400;
      }
      thead th {
        color: var(--proof-quiet);
        position: sticky;
        top: 0;
        background: var(--proof-ground);
      }
    `,
  ];

  constructor() {
    super();
    this.section = null;
    this.cursor = 0;
    this.open = false;
  }

  override render() {
    const { section } = this;
    const { width } = this.#room;
    if (section === null || width < 40) return html`<svg aria-hidden="true"></svg>`;
    const left = LEFT * textScale(this);
    const x = (share: number): number => left + share * (width - left - 4);
    const y = (code: number): number => 4 + (1 - code / 255) * (HEIGHT - BOTTOM - 8);
    return html`
      <svg aria-hidden="true">
        ${[0, 64, 128, 192, 255].map(
          (code) => svg`<line class="rule" x1=${left} x2=${x(1)} y1=${y(code)} y2=${y(code)}></line>
            ${code % 128 === 0 || code === 255 ? svg`<text x=${left - 5} y=${y(code) + 3}>${code}</text>` : nothing}`,
        )}
        <line class="here" x1=${x(this.cursor)} x2=${x(this.cursor)} y1="0" y2=${HEIGHT - BOTTOM}></line>
        ${section.source === null ? nothing : svg`<polyline class="source" points=${stairs(section.source, x, y)}></polyline>`}
        ${section.prints.map(
          (track, i) => svg`
            <polyline class=${track.selected ? 'chosen' : ''} stroke-dasharray=${DASHES[i % DASHES.length]} points=${stairs(track, x, y)}></polyline>
            ${track.overshoots.map(({ index, side }) => {
              const [cx, cy] = [x((index + 0.5) / track.values.length), y(track.values[index])];
              return svg`<path class="mark" d=${side > 0 ? `M${cx - 3} ${cy - 2}h6l-3 -5z` : `M${cx - 3} ${cy + 2}h6l-3 5z`}></path>`;
            })}
          `,
        )}
      </svg>
      <div class="legend">
        ${sectionTracks(section).map(
          (track) => html`<span>
            <svg aria-hidden="true" viewBox="0 0 22 8">
              ${svg`<polyline class=${track === section.source ? 'source' : track.selected ? 'chosen' : ''} stroke-dasharray=${
                track === section.source ? '' : DASHES[section.prints.indexOf(track) % DASHES.length]
              } points="0,4 22,4"></polyline>`}
            </svg>${track.name}
          </span>`,
        )}
        <span class="quiet">${t('▲▼ overshoot')}</span>
      </div>
      <details @toggle=${this.#toggle}>
        <summary>${t('Table')}</summary>
        <div class="scroll" tabindex="0" role="region" aria-label=${t('Table of the cross-section')}>
          <table class="number">
            <thead>
              <tr>
                <th scope="col">${t('texel')}</th>
                ${sectionTracks(section).map(({ name }) => html`<th scope="col">${name}</th>`)}
              </tr>
            </thead>
            <tbody>
              ${(this.open ? sectionRows(section) : []).map(
                ([texel, ...values]) => html`<tr>
                  <th scope="row">${texel}</th>
                  ${values.map((value) => html`<td>${Number.isNaN(value) ? '' : figure(value, 1)}</td>`)}
                </tr>`,
              )}
            </tbody>
          </table>
        </div>
      </details>
    `;
  }

  #toggle(event: Event): void {
    this.open = (event.target as HTMLDetailsElement).open;
  }
}

customElements.define('section-plot', SectionPlot);

/** Lines of prints are told apart by their dashes. */
const DASHES = ['', '6 3', '2 2', '8 3 2 3', '1 3'] as const;

/** Each value holds over its texel: stairs, not slopes. */
function stairs(track: Track, x: (share: number) => number, y: (code: number) => number): string {
  const count = track.values.length;
  return track.values
    .map((value, i) => {
      const height = y(value).toFixed(1);
      return `${x(i / count).toFixed(1)},${height} ${x((i + 1) / count).toFixed(1)},${height}`;
    })
    .join(' ');
}
