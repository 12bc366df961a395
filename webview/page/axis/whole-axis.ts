import { html, LitElement, nothing, type PropertyDeclarations, type SVGTemplateResult, svg } from 'lit';
import { figure } from '../../../core/figures.ts';
import type { Picture } from '../../../core/proof/want.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { controls } from '../form/controls.ts';
import { Room } from '../form/room.ts';
import { textScale } from '../form/text-scale.ts';
import { type AxisScale, axisScale, type Placed } from '../state/scale.ts';
import type { State } from '../state/state.ts';
import { t } from '../words/t.ts';
import { type Curve, drawCurve, isBeyond } from './curve.ts';
import { drawSight, isFirstAt, labelsAt, type Rows, rowsOf, SAME_PLACE, sizeText, THUMB_HEIGHT } from './rows.ts';
import { axisStyles } from './size-axis.styles.ts';
import { paintThumb } from './thumb.ts';

/** What an axis shows. */
export interface AxisFacts<S extends Placed> {
  readonly stops: readonly S[];
  readonly curves: readonly Curve[];
  /** Where the sight is. */
  readonly lod: number;
  /** The stop on which it rests; null between stops. */
  readonly here: S | null;
  /** The place in words. */
  readonly words: string;
  /** Name of the row of thumbs. */
  readonly thumbs: string;
  /** What stands under a level, as a distance; null for a row that is not there. */
  readonly distance: ((stop: S) => string) | null;
  /** What thumbs are shaded by; null while they cannot be. */
  readonly treatment: Treatment | null;
  readonly backdrop: State['backdrop'];
}

/** The size axis of a proof and of a review: stops from large to small, each at its true size, curves of what is measured there, and
 *  the sight. */
export abstract class WholeAxis<S extends Placed> extends LitElement {
  static override properties: PropertyDeclarations = {
    model: { attribute: false },
    tick: { type: Number },
    textScale: { state: true },
  };
  declare tick: number;
  declare textScale: number;
  readonly #room = new Room(this);
  readonly #painted = new WeakMap<HTMLCanvasElement, string>();

  static override styles = [controls, axisStyles];

  constructor() {
    super();
    this.tick = 0;
    this.textScale = 1;
  }

  /** Null where there is nothing to show. */
  protected abstract facts(): AxisFacts<S> | null;

  /** Room for the names of rows, in CSS pixels at the usual size of text. */
  protected abstract readonly nameWidth: number;

  protected abstract pictureAt(stop: S): Picture | null;

  /** Whether the build writes the image of a stop. */
  protected abstract ships(stop: S): boolean;

  /** Takes the sight to a place; `level` is the width of a level in CSS pixels. */
  protected abstract moveTo(lod: number, level: number): void;

  /** Takes the sight to where a curve is beyond its limit. */
  protected abstract goToWorst(lod: number): void;

  /** Says of a point that is beyond its limit where it is and where a press takes to; null where nothing stands there. */
  protected abstract worstWords(curve: Curve, lod: number, value: string): string | null;

  /** Answers whether the key was one of the axis. */
  protected abstract press(event: KeyboardEvent): boolean;

  /** Room at the left for the names of rows; narrow pages put the names into the rows. */
  get #gutter(): number {
    return this.#room.width < 620 * this.textScale ? 0 : this.nameWidth * this.textScale;
  }

  #scale(stops: readonly S[]): AxisScale {
    return axisScale(
      stops,
      Math.max(120, this.#room.width - this.#gutter),
      (this.#gutter === 0 ? 26 : 54) * this.textScale,
    );
  }

  override render() {
    const facts = this.facts();
    if (facts === null || this.#room.width === 0) return html`<div class="plot"></div>`;
    const { stops, curves, lod } = facts;
    const scale = this.#scale(stops);
    const targets = stops.some(({ kind }) => kind !== 'level');
    const names = this.#gutter === 0 ? 'above' : 'beside';
    const rows = rowsOf({ curves: curves.length, targets, distances: facts.distance !== null, names }, this.textScale);
    const top = (index: number): number => rows.curves + index * rows.curve + rows.curveTop;
    const room = rows.curve - rows.curveTop;
    return html`
      <div class="plot" data-height=${rows.height} data-thumbs=${rows.thumbs}>
        ${stops.map((stop) => html`<canvas class="thumb" aria-hidden="true" data-stop=${stop.label}></canvas>`)}
        <svg aria-hidden="true">
          <g transform=${`translate(${this.#gutter} 0)`}>
            ${this.#sizes(facts, scale, rows)}
            ${curves.map((curve, i) => drawCurve(curve, scale, top(i), room))}
            ${drawSight(scale.x(lod), rows, curves.length)}
          </g>
          ${this.#names(facts, rows)}
        </svg>
        <div
          class="stage"
          role="slider"
          tabindex="0"
          aria-label=${t('Sight on the size axis')}
          aria-valuemin=${figure(scale.first)}
          aria-valuemax=${figure(scale.last)}
          aria-valuenow=${figure(lod)}
          aria-valuetext=${facts.words}
          @pointerdown=${this.#grasp}
          @pointermove=${this.#drag}
          @keydown=${this.#key}
        ></div>
        ${curves.flatMap((curve, i) => this.#beyond(curve, scale, top(i) + room / 2))}
      </div>
    `;
  }

  #sizes({ stops, here, distance }: AxisFacts<S>, scale: AxisScale, rows: Rows): SVGTemplateResult {
    const rail = rows.level - 4;
    const spacing = scale.x(1) - scale.x(0);
    return svg`
      <line class="rail" x1=${scale.x(scale.first)} x2=${scale.x(scale.last)} y1=${rail} y2=${rail}></line>
      ${stops.map((stop) => {
        const x = scale.x(stop.lod);
        const ships = this.ships(stop);
        const look = `${stop === here ? 'here' : ''} ${ships ? '' : 'faint'}`;
        if (stop.kind !== 'level') {
          return svg`<path class=${stop.kind} d=${`M${x} ${rail - 4.5}l4.5 4.5l-4.5 4.5l-4.5 -4.5z`}></path>
            ${isFirstAt(stops, stop) ? svg`<text x=${x} y=${rows.targets + rows.baseline} class=${look}>${labelsAt(stops, stop)}</text>` : nothing}`;
        }
        const odd = stop.lod % 2 === 1;
        const crowded = odd && spacing < 34 * this.textScale;
        const label = ships ? stop.label : `(${stop.label})`;
        const named = stop === here || !odd || spacing >= (label.length + 1) * DIGIT * this.textScale;
        return svg`<line class="tick" x1=${x} x2=${x} y1=${rail - 4} y2=${rail + 4}></line>
          ${named ? svg`<text class=${look} x=${x} y=${rows.level + rows.baseline + 1}>${label}</text>` : nothing}
          ${crowded ? nothing : svg`<text class=${look} x=${x} y=${rows.baseline}>${sizeText(stop, spacing, this.textScale)}</text>`}
          ${
            distance === null || crowded
              ? nothing
              : svg`<text x=${x} y=${rows.meters + rows.baseline} class="faint">${distance(stop)}</text>`
          }`;
      })}
    `;
  }

  #names({ curves, thumbs, lod, here }: AxisFacts<S>, rows: Rows) {
    const name = (text: string, y: number) => svg`<text class="name" x="10" y=${y}>${text}</text>`;
    // Between stops the nearest level speaks; a stop speaks for itself alone.
    const place = here === null ? Math.round(lod) : here.lod;
    const curveName = (curve: Curve): string => {
      const at = curve.points.find((point) => point.lod === place);
      return at === undefined ? curve.name : `${curve.name} ${curve.format(at.value)}`;
    };
    if (this.#gutter === 0) {
      return curves.map((curve, i) => name(curveName(curve), rows.curves + i * rows.curve + rows.baseline));
    }
    return svg`
      ${name(t('size'), rows.baseline)}
      ${name(thumbs, rows.thumbs + rows.baseline)}
      ${name(t('level'), rows.level + rows.baseline + 1)}
      ${rows.targets > 0 ? name(t('target'), rows.targets + rows.baseline) : nothing}
      ${rows.meters > 0 ? name(t('meters'), rows.meters + rows.baseline) : nothing}
      ${curves.map((curve, i) => name(curveName(curve), rows.curves + (i + 0.68) * rows.curve))}
    `;
  }

  /** Where a curve leaves its limit: a button that takes the sight there. */
  #beyond(curve: Curve, scale: AxisScale, middle: number) {
    return curve.points.flatMap(({ lod, value }) => {
      const words = isBeyond(curve, value) ? this.worstWords(curve, lod, curve.format(value)) : null;
      if (words === null) return [];
      return html`<button
        class="worst"
        data-x=${this.#gutter + scale.x(lod)}
        data-y=${middle}
        aria-label=${words}
        @click=${() => this.goToWorst(lod)}
      ></button>`;
    });
  }

  override updated(): void {
    this.textScale = textScale(this);
    const plot = this.renderRoot.querySelector<HTMLElement>('.plot');
    if (plot?.dataset.height === undefined) return;
    plot.style.height = `${plot.dataset.height}px`;
    for (const button of this.renderRoot.querySelectorAll<HTMLElement>('.worst')) {
      button.style.left = `${button.dataset.x}px`;
      button.style.top = `${button.dataset.y}px`;
    }
    this.#paintThumbs(Number(plot.dataset.thumbs));
  }

  #paintThumbs(top: number): void {
    const facts = this.facts();
    if (facts === null || facts.treatment === null) return;
    const { stops, treatment, backdrop } = facts;
    const scale = this.#scale(stops);
    const spacing = scale.x(1) - scale.x(0);
    const ratio = window.devicePixelRatio;
    const canvases = this.renderRoot.querySelectorAll<HTMLCanvasElement>('.thumb');
    for (const [i, stop] of stops.entries()) {
      const canvas = canvases[i];
      if (canvas === undefined) continue;
      const picture = this.pictureAt(stop);
      // A target takes the room up to its neighbors; two at one place would lie over each other.
      const others = stops.map((each) => Math.abs(each.lod - stop.lod)).filter((lods) => lods > SAME_PLACE);
      const room = Math.min(...others, 1) * spacing;
      canvas.hidden = picture === null || room < 10 || !isFirstAt(stops, stop);
      if (picture === null || canvas.hidden) continue;
      const most = { width: Math.max(1, Math.floor((room - 6) * ratio)), height: Math.floor(THUMB_HEIGHT * ratio) };
      const key = [stop.label, most.width, ratio, backdrop, idOf(picture), idOf(treatment)].join(' ');
      if (this.#painted.get(canvas) !== key) {
        this.#painted.set(canvas, key);
        paintThumb(canvas, picture, treatment, { backdrop }, most);
      }
      // Whole device pixels, else the thumb would be blurred; they stand on the rail.
      const snap = (length: number): number => Math.round(length * ratio) / ratio;
      canvas.style.left = `${snap(this.#gutter + scale.x(stop.lod) - canvas.width / ratio / 2)}px`;
      canvas.style.top = `${snap(top + THUMB_HEIGHT - canvas.height / ratio)}px`;
    }
  }

  #grasp(event: PointerEvent): void {
    if (event.button !== 0) return;
    (event.currentTarget as Element).setPointerCapture(event.pointerId);
    this.#follow(event);
  }

  #drag(event: PointerEvent): void {
    if ((event.currentTarget as Element).hasPointerCapture(event.pointerId)) this.#follow(event);
  }

  #follow(event: PointerEvent): void {
    const facts = this.facts();
    if (facts === null) return;
    const scale = this.#scale(facts.stops);
    const box = this.getBoundingClientRect();
    this.moveTo(scale.lod(event.clientX - box.left - this.#gutter), scale.x(1) - scale.x(0));
  }

  #key(event: KeyboardEvent): void {
    if (this.press(event)) event.preventDefault();
  }
}

/** Width of a digit on the axis, in CSS pixels at the usual size of text. */
const DIGIT = 7;

/** Steps along the axis by arrow keys; undefined for other keys. */
export function directionOf({ key }: KeyboardEvent): 1 | -1 | undefined {
  return ({ ArrowLeft: -1, ArrowUp: -1, ArrowRight: 1, ArrowDown: 1 } as const)[key];
}

const ids = new WeakMap<object, number>();
let lastId = 0;

function idOf(thing: object): number {
  const id = ids.get(thing) ?? ++lastId;
  ids.set(thing, id);
  return id;
}
