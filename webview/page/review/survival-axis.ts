import { html, LitElement, nothing, svg } from 'lit';
import { figure } from '../../../core/figures.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { type Curve, drawCurve, isBeyond } from '../axis/curve.ts';
import { drawSight, isFirstAt, labelsAt, type Rows, rowsOf, SAME_PLACE, sizeText, THUMB_HEIGHT } from '../axis/rows.ts';
import { type AxisScale, axisScale, stopNear } from '../axis/scale.ts';
import { axisStyles } from '../axis/size-axis.styles.ts';
import { paintThumb } from '../axis/thumb.ts';
import { controls } from '../form/controls.ts';
import { textScale } from '../form/text-scale.ts';
import { t } from '../words/t.ts';
import type { ReviewModel } from './model.ts';
import { curvesOf, distance, type SizeStop, sightOf } from './sizes.ts';

/** The size axis of a review: every size, the texture after the change at its true size, how much of the change survives there,
 *  and the sight. */
export class SurvivalAxis extends LitElement {
  static override properties = {
    model: { attribute: false },
    tick: { type: Number },
    width: { state: true },
    textScale: { state: true },
  };
  declare model: ReviewModel | null;
  declare tick: number;
  declare width: number;
  declare textScale: number;
  readonly #observer = new ResizeObserver(([entry]) => {
    this.width = entry.contentRect.width;
  });
  readonly #painted = new WeakMap<HTMLCanvasElement, Picture>();

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

  get #gutter(): number {
    return this.width < 620 * this.textScale ? 0 : 132 * this.textScale;
  }

  #scale(stops: readonly SizeStop[]): AxisScale {
    return axisScale(stops, Math.max(120, this.width - this.#gutter), (this.#gutter === 0 ? 26 : 54) * this.textScale);
  }

  override render() {
    const { model } = this;
    const stops = model?.stops ?? [];
    const seen = model?.seen ?? null;
    if (model === null || seen === null || this.width === 0) return html`<div class="plot"></div>`;
    const scale = this.#scale(stops);
    const curves = curvesOf(stops);
    const targets = stops.some(({ kind }) => kind !== 'level');
    const rows = rowsOf({ curves: curves.length, targets, distances: false }, this.textScale);
    return html`
      <div class="plot" data-height=${rows.height} data-thumbs=${rows.thumbs}>
        ${stops.map((stop) => html`<canvas class="thumb" aria-hidden="true" data-stop=${stop.label}></canvas>`)}
        <svg aria-hidden="true">
          <g transform=${`translate(${this.#gutter} 0)`}>
            ${this.#sizes(stops, seen, scale, rows)}
            ${curves.map((curve, i) => drawCurve(curve, scale, rows.curves + i * rows.curve, rows.curve))}
            ${drawSight(scale.x(seen.lod), rows)}
          </g>
          ${this.#names(curves, rows, seen)}
        </svg>
        <div
          class="stage"
          role="slider"
          tabindex="0"
          aria-label=${t('Sight on the size axis')}
          aria-valuemin=${figure(scale.first)}
          aria-valuemax=${figure(scale.last)}
          aria-valuenow=${figure(seen.lod)}
          aria-valuetext=${valueText(seen)}
          @pointerdown=${this.#press}
          @pointermove=${this.#move}
          @keydown=${this.#key}
        ></div>
        ${curves.flatMap((curve, i) => this.#beyond(curve, stops, scale, rows.curves + (i + 0.5) * rows.curve))}
      </div>
    `;
  }

  #sizes(stops: readonly SizeStop[], seen: SizeStop, scale: AxisScale, rows: Rows) {
    const rail = rows.level - 4;
    const spacing = scale.x(1) - scale.x(0);
    return svg`
      <line class="rail" x1=${scale.x(scale.first)} x2=${scale.x(scale.last)} y1=${rail} y2=${rail}></line>
      ${stops.map((stop) => {
        const x = scale.x(stop.lod);
        const here = stop === seen ? 'here' : '';
        if (stop.kind !== 'level') {
          return svg`<path class=${stop.kind} d=${`M${x} ${rail - 4.5}l4.5 4.5l-4.5 4.5l-4.5 -4.5z`}></path>
            ${isFirstAt(stops, stop) ? svg`<text x=${x} y=${rows.targets + rows.baseline} class=${here}>${labelsAt(stops, stop)}</text>` : nothing}`;
        }
        const crowded = spacing < 34 * this.textScale && stop.lod % 2 === 1;
        return svg`<line class="tick" x1=${x} x2=${x} y1=${rail - 4} y2=${rail + 4}></line>
          <text class=${here} x=${x} y=${rows.level + rows.baseline + 1}>${stop.label}</text>
          ${crowded ? nothing : svg`<text class=${here} x=${x} y=${rows.baseline}>${sizeText(stop, spacing, this.textScale)}</text>`}`;
      })}
    `;
  }

  #names(curves: readonly Curve[], rows: Rows, seen: SizeStop) {
    const name = (text: string, y: number) => svg`<text class="name" x="10" y=${y}>${text}</text>`;
    if (this.#gutter === 0) return curves.map((curve, i) => name(curve.name, rows.curves + i * rows.curve + 9));
    return svg`
      ${name(t('size'), rows.baseline)}
      ${name(t('true size, after'), rows.thumbs + rows.baseline)}
      ${name(t('level'), rows.level + rows.baseline + 1)}
      ${rows.targets > 0 ? name(t('target'), rows.targets + rows.baseline) : nothing}
      ${curves.map((curve, i) => {
        const at = curve.points.find((point) => point.lod === seen.lod);
        const text = at === undefined ? curve.name : `${curve.name} ${curve.format(at.value)}`;
        return name(text, rows.curves + (i + 0.68) * rows.curve);
      })}
    `;
  }

  /** Where a curve leaves its limit: a button that takes the sight there. */
  #beyond(curve: Curve, stops: readonly SizeStop[], scale: AxisScale, middle: number) {
    return curve.points.flatMap(({ lod, value }) => {
      const stop = stops.find((each) => each.lod === lod);
      if (stop === undefined || !isBeyond(curve, value)) return [];
      return html`<button
        class="worst"
        data-x=${this.#gutter + scale.x(lod)}
        data-y=${middle}
        aria-label=${t('{name} is beyond its limit at {size}: {value}. Go there.', {
          name: curve.name,
          size: sizeName(stop),
          value: curve.format(value),
        })}
        @click=${() => this.#goTo(stop)}
      ></button>`;
    });
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
    const treatment = model?.treatment('after') ?? model?.treatment('before') ?? null;
    if (model === null || treatment === null) return;
    const { stops } = model;
    const scale = this.#scale(stops);
    const spacing = scale.x(1) - scale.x(0);
    const ratio = window.devicePixelRatio;
    const top = Number(this.renderRoot.querySelector<HTMLElement>('.plot')?.dataset.thumbs ?? 0);
    const canvases = this.renderRoot.querySelectorAll<HTMLCanvasElement>('.thumb');
    for (const [i, stop] of stops.entries()) {
      const canvas = canvases[i];
      if (canvas === undefined) continue;
      const picture = pictureAt(model, stop);
      const others = stops.map((each) => Math.abs(each.lod - stop.lod)).filter((lods) => lods > SAME_PLACE);
      const room = Math.min(...others, 1) * spacing;
      canvas.hidden = picture === null || room < 10 || !isFirstAt(stops, stop);
      if (picture === null || canvas.hidden) continue;
      if (this.#painted.get(canvas) !== picture || canvas.dataset.room !== `${room}`) {
        this.#painted.set(canvas, picture);
        canvas.dataset.room = `${room}`;
        const most = {
          width: Math.max(1, Math.floor((room - 6) * ratio)),
          height: Math.floor(THUMB_HEIGHT * ratio),
        };
        paintThumb(canvas, picture, treatment, model.state, most);
      }
      // Whole device pixels, else the thumb would be blurred.
      const snap = (length: number): number => Math.round(length * ratio) / ratio;
      canvas.style.left = `${snap(this.#gutter + scale.x(stop.lod) - canvas.width / ratio / 2)}px`;
      canvas.style.top = `${snap(top + THUMB_HEIGHT - canvas.height / ratio)}px`;
    }
  }

  #press(event: PointerEvent): void {
    if (event.button !== 0) return;
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
    this.#follow(event);
  }

  #move(event: PointerEvent): void {
    if ((event.currentTarget as Element).hasPointerCapture(event.pointerId)) this.#follow(event);
  }

  /** A review knows its sizes and nothing between them. */
  #follow(event: PointerEvent): void {
    const { model } = this;
    if (model === null) return;
    const box = this.getBoundingClientRect();
    const lod = this.#scale(model.stops).lod(event.clientX - box.left - this.#gutter);
    const stop = stopNear(model.stops, lod, Number.POSITIVE_INFINITY);
    if (stop !== null && stop !== model.seen) this.#goTo(stop);
  }

  #goTo(stop: SizeStop): void {
    this.model?.set({ sight: sightOf(stop), cursor: null });
  }

  #key(event: KeyboardEvent): void {
    const { model } = this;
    const seen = model?.seen;
    if (model == null || seen == null) return;
    const { stops } = model;
    const direction = { ArrowLeft: -1, ArrowUp: -1, ArrowRight: 1, ArrowDown: 1 }[event.key];
    const last = stops.length - 1;
    if (direction !== undefined) this.#goTo(stops[Math.min(last, Math.max(0, stops.indexOf(seen) + direction))]);
    else if (event.key === 'Home') this.#goTo(stops[0]);
    else if (event.key === 'End') this.#goTo(stops[last]);
    else return;
    event.preventDefault();
  }
}

customElements.define('survival-axis', SurvivalAxis);

/** `level 3`, or a target's name. */
export function sizeName({ kind, label }: SizeStop): string {
  return kind === 'level' ? t('level {level}', { level: label }) : label;
}

function valueText(stop: SizeStop): string {
  const { width, height } = stop.extent;
  const { difference } = stop.size;
  const place = t('{size}, {width} by {height} texels', { size: sizeName(stop), width, height });
  return difference === null
    ? place
    : t('{place}, worst difference {worst}', { place, worst: distance(difference.worst) });
}

function pictureAt(model: ReviewModel, stop: SizeStop): Picture | null {
  const pair = model.pair(stop);
  if (pair === null || 'problem' in pair) return null;
  return (pair.after ?? pair.before)?.picture ?? null;
}
