import { html, LitElement, nothing, svg } from 'lit';
import { figure } from '../../../core/figures.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { controls } from '../form/controls.ts';
import { textScale } from '../form/text-scale.ts';
import { isProblem } from '../proof/bench-link.ts';
import type { Model } from '../proof/model.ts';
import { meters } from '../words/meters.ts';
import { t } from '../words/t.ts';
import { type Curve, drawCurve, isBeyond } from './curve.ts';
import { curvesOf } from './curves.ts';
import { distanceOf } from './lod.ts';
import {
  drawSight,
  isFirstAt,
  isShipped,
  labelsAt,
  type Rows,
  rowsOf,
  SAME_PLACE,
  sizeText,
  THUMB_HEIGHT,
} from './rows.ts';
import { type AxisScale, axisScale, type Stop, stopNear } from './scale.ts';
import { goToWorst, sightBetween, sightOf, stepFrom, valueText } from './sight.ts';
import { axisStyles } from './size-axis.styles.ts';
import { paintThumb } from './thumb.ts';

/** CSS pixels within which the sight falls to a stop. */
const SNAP = 7;

/** The size axis: levels and targets from large to small, each at its true size, what is measured on them, and the sight. */
export class SizeAxis extends LitElement {
  static override properties = {
    model: { attribute: false },
    tick: { type: Number },
    width: { state: true },
    textScale: { state: true },
  };
  declare model: Model | null;
  declare tick: number;
  declare width: number;
  declare textScale: number;
  readonly #observer = new ResizeObserver(([entry]) => {
    this.width = entry.contentRect.width;
  });
  readonly #painted = new WeakMap<HTMLCanvasElement, string>();

  static override styles = [controls, axisStyles];

  constructor() {
    super();
    this.model = null;
    this.tick = 0;
    this.width = 0;
    this.textScale = 1;
  }

  override connectedCallback(): void {
    super.connectedCallback();
    this.#observer.observe(this);
  }

  override disconnectedCallback(): void {
    super.disconnectedCallback();
    this.#observer.disconnect();
  }

  /** Room at the left for the names of rows; narrow pages put the names into the rows. */
  get #gutter(): number {
    return this.width < 620 * this.textScale ? 0 : 96 * this.textScale;
  }

  #scale(stops: readonly Stop[]): AxisScale {
    return axisScale(stops, Math.max(120, this.width - this.#gutter), (this.#gutter === 0 ? 26 : 54) * this.textScale);
  }

  override render() {
    const { model } = this;
    const stops = model?.stops ?? [];
    const seen = model?.seen ?? null;
    if (model === null || seen === null || this.width === 0) return html`<div class="plot"></div>`;
    const scale = this.#scale(stops);
    const curves = curvesOf(model);
    const rows = rowsOf(
      {
        curves: curves.length,
        targets: stops.some(({ kind }) => kind !== 'level'),
        distances: model.outlook !== null,
      },
      this.textScale,
    );
    const value = valueText(model);
    return html`
      <div class="plot" data-height=${rows.height} data-thumbs=${rows.thumbs}>
        ${stops.map((stop) => html`<canvas class="thumb" aria-hidden="true" data-stop=${stop.label}></canvas>`)}
        <svg aria-hidden="true">
          <g transform=${`translate(${this.#gutter} 0)`}>
            ${this.#levels(model, stops, scale, rows)}
            ${curves.map((curve, i) => drawCurve(curve, scale, rows.curves + i * rows.curve, rows.curve))}
            ${drawSight(scale.x(seen.lod), rows)}
          </g>
          ${this.#names(curves, rows, seen.lod)}
        </svg>
        <div
          class="stage"
          role="slider"
          tabindex="0"
          aria-label=${t('Sight on the size axis')}
          aria-valuemin=${figure(scale.first)}
          aria-valuemax=${figure(scale.last)}
          aria-valuenow=${figure(seen.lod)}
          aria-valuetext=${value}
          @pointerdown=${this.#press}
          @pointermove=${this.#move}
          @keydown=${this.#key}
        ></div>
        ${curves.flatMap((curve, i) => this.#beyond(model, curve, scale, rows.curves + (i + 0.5) * rows.curve))}
      </div>
    `;
  }

  #levels(model: Model, stops: readonly Stop[], scale: AxisScale, rows: Rows) {
    const { outlook } = model;
    const rail = rows.level - 4;
    const spacing = scale.x(1) - scale.x(0);
    return svg`
      <line class="rail" x1=${scale.x(scale.first)} x2=${scale.x(scale.last)} y1=${rail} y2=${rail}></line>
      ${stops.map((stop) => {
        const x = scale.x(stop.lod);
        const shipped = isShipped(model.treatment!, stop) ? '' : 'faint';
        const here = model.seen!.stop?.label === stop.label && model.seen!.stop.kind === stop.kind ? 'here' : '';
        if (stop.kind !== 'level') {
          return svg`<path class=${stop.kind} d=${`M${x} ${rail - 4.5}l4.5 4.5l-4.5 4.5l-4.5 -4.5z`}></path>
            ${isFirstAt(stops, stop) ? svg`<text x=${x} y=${rows.targets + rows.baseline} class=${here}>${labelsAt(stops, stop)}</text>` : nothing}`;
        }
        const crowded = spacing < 34 * this.textScale && stop.lod % 2 === 1;
        return svg`<line class="tick" x1=${x} x2=${x} y1=${rail - 4} y2=${rail + 4}></line>
          <text class="${here} ${shipped}" x=${x} y=${rows.level + rows.baseline + 1}>${shipped === '' ? stop.label : `(${stop.label})`}</text>
          ${crowded ? nothing : svg`<text class="${here} ${shipped}" x=${x} y=${rows.baseline}>${sizeText(stop, spacing, this.textScale)}</text>`}
          ${
            outlook === null || crowded
              ? nothing
              : svg`<text x=${x} y=${rows.meters + rows.baseline} class="faint">${meters(distanceOf(stop.lod, outlook))}</text>`
          }`;
      })}
    `;
  }

  #names(curves: readonly Curve[], rows: Rows, lod: number) {
    const name = (text: string, y: number) => svg`<text class="name" x="10" y=${y}>${text}</text>`;
    if (this.#gutter === 0) return curves.map((curve, i) => name(curve.name, rows.curves + i * rows.curve + 9));
    return svg`
      ${name(t('size'), rows.baseline)}
      ${name(t('true size'), rows.thumbs + rows.baseline)}
      ${name(t('level'), rows.level + rows.baseline + 1)}
      ${rows.targets > 0 ? name(t('target'), rows.targets + rows.baseline) : nothing}
      ${rows.meters > 0 ? name(t('meters'), rows.meters + rows.baseline) : nothing}
      ${curves.map((curve, i) => {
        const at = curve.points.find((point) => point.lod === Math.round(lod));
        const text = at === undefined ? curve.name : `${curve.name} ${curve.format(at.value)}`;
        return name(text, rows.curves + (i + 0.68) * rows.curve);
      })}
    `;
  }

  /** Where a curve leaves its limit: a button that takes the sight there, and the cursor to the worst texel. */
  #beyond(model: Model, curve: Curve, scale: AxisScale, middle: number) {
    return curve.points
      .filter(({ value }) => isBeyond(curve, value))
      .map(
        ({ lod, value }) => html`<button
          class="worst"
          data-x=${this.#gutter + scale.x(lod)}
          data-y=${middle}
          aria-label=${t('{name} is beyond its limit at level {level}: {value}. Go there.', {
            name: curve.name,
            level: lod,
            value: curve.format(value),
          })}
          @click=${() => goToWorst(model, lod)}
        ></button>`,
      );
  }

  override updated(): void {
    this.textScale = textScale(this);
    const plot = this.renderRoot.querySelector<HTMLElement>('.plot');
    if (plot !== null && plot.dataset.height !== undefined) plot.style.height = `${plot.dataset.height}px`;
    for (const button of this.renderRoot.querySelectorAll<HTMLElement>('.worst')) {
      button.style.left = `${button.dataset.x}px`;
      button.style.top = `${button.dataset.y}px`;
    }
    this.#paintThumbs();
  }

  #paintThumbs(): void {
    const { model } = this;
    if (model?.treatment == null) return;
    const stops = model.stops;
    const scale = this.#scale(stops);
    const ratio = window.devicePixelRatio;
    const canvases = this.renderRoot.querySelectorAll<HTMLCanvasElement>('.thumb');
    stops.forEach((stop, i) => {
      const canvas = canvases[i];
      if (canvas === undefined) return;
      const picture = pictureAt(model, stop);
      canvas.hidden = picture === null;
      if (picture === null) return;
      // A target takes the room up to its neighbors; two at one place would lie over each other.
      const others = stops.map((each) => Math.abs(each.lod - stop.lod)).filter((distance) => distance > SAME_PLACE);
      const room = Math.min(...others, 1);
      const width = Math.max(1, Math.floor((room * (scale.x(1) - scale.x(0)) - 6) * ratio));
      const most = { width, height: Math.floor(THUMB_HEIGHT * ratio) };
      canvas.hidden = room * (scale.x(1) - scale.x(0)) < 10 || !isFirstAt(stops, stop);
      const key = [stop.label, width, ratio, model.state.backdrop, idOf(picture), idOf(model.treatment!)].join(' ');
      if (this.#painted.get(canvas) !== key) {
        this.#painted.set(canvas, key);
        paintThumb(canvas, picture, model.treatment!, model.state, most);
      }
      // Whole device pixels, else the thumb would be blurred.
      const snap = (length: number): number => Math.round(length * ratio) / ratio;
      canvas.style.left = `${snap(this.#gutter + scale.x(stop.lod) - canvas.width / ratio / 2)}px`;
      // They stand on the rail.
      canvas.style.top = `${snap(Number(this.renderRoot.querySelector<HTMLElement>('.plot')!.dataset.thumbs) + THUMB_HEIGHT - canvas.height / ratio)}px`;
    });
  }

  #lodAt(event: PointerEvent): number {
    const box = this.getBoundingClientRect();
    return this.#scale(this.model!.stops).lod(event.clientX - box.left - this.#gutter);
  }

  #press(event: PointerEvent): void {
    if (event.button !== 0) return;
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
    this.#sightTo(this.#lodAt(event));
  }

  #move(event: PointerEvent): void {
    if ((event.currentTarget as Element).hasPointerCapture(event.pointerId)) this.#sightTo(this.#lodAt(event));
  }

  #sightTo(lod: number): void {
    const { model } = this;
    if (model === null) return;
    const scale = this.#scale(model.stops);
    const stop = stopNear(model.stops, lod, SNAP / (scale.x(1) - scale.x(0)));
    const sight = stop === null ? sightBetween(model, lod) : sightOf(stop);
    if (JSON.stringify(sight) !== JSON.stringify(model.state.sight)) model.set({ sight });
  }

  #key(event: KeyboardEvent): void {
    const { model } = this;
    const seen = model?.seen;
    if (model == null || seen == null) return;
    const { stops } = model;
    const direction = { ArrowLeft: -1, ArrowUp: -1, ArrowRight: 1, ArrowDown: 1 }[event.key];
    if (direction !== undefined && event.shiftKey) model.set({ sight: sightBetween(model, seen.lod + direction / 20) });
    else if (direction !== undefined) model.set({ sight: sightOf(stepFrom(stops, seen, direction)) });
    else if (event.key === 'Home') model.set({ sight: sightOf(stops[0]) });
    else if (event.key === 'End') model.set({ sight: sightOf(stops[stops.length - 1]) });
    else return;
    event.preventDefault();
  }
}

customElements.define('size-axis', SizeAxis);

function pictureAt(model: Model, stop: Stop): Picture | null {
  const { image } = stop;
  if ('level' in image) return model.levels()?.levels.find(({ level }) => level === image.level)?.cut ?? null;
  const told = model.print(model.treatment!, stop.image);
  return told === undefined || isProblem(told) ? null : told.picture;
}

const ids = new WeakMap<object, number>();
let lastId = 0;

function idOf(thing: object): number {
  const id = ids.get(thing) ?? ++lastId;
  ids.set(thing, id);
  return id;
}
