import type { Picture } from '../../../core/proof/want.ts';
import type { Curve } from '../axis/curve.ts';
import { type AxisFacts, directionOf, WholeAxis } from '../axis/whole-axis.ts';
import { stopNear } from '../state/scale.ts';
import { t } from '../words/t.ts';
import type { ReviewModel } from './model.ts';
import { curvesOf, distance, type SizeStop, sightOf } from './sizes.ts';

/** The size axis of a review: every size, the texture after the change at its true size, and how much of the change survives there. */
export class SurvivalAxis extends WholeAxis<SizeStop> {
  declare model: ReviewModel | null;
  protected override readonly nameWidth = 132;

  constructor() {
    super();
    this.model = null;
  }

  protected override facts(): AxisFacts<SizeStop> | null {
    const { model } = this;
    const seen = model?.seen ?? null;
    if (model === null || seen === null) return null;
    const { stops } = model;
    return {
      stops,
      curves: curvesOf(stops),
      lod: seen.lod,
      here: seen,
      words: valueText(seen),
      thumbs: model.missing('after') === null ? t('true size, after') : t('true size, before'),
      distance: null,
      treatment: model.treatment('after') ?? model.treatment('before'),
      backdrop: model.state.backdrop,
    };
  }

  protected override pictureAt(stop: SizeStop): Picture | null {
    const pair = this.model!.pair(stop);
    if (pair === null || 'problem' in pair) return null;
    return (pair.after ?? pair.before)?.picture ?? null;
  }

  /** A review knows no sizes beside those that are built. */
  protected override ships(): boolean {
    return true;
  }

  /** A review knows its sizes and nothing between them. */
  protected override moveTo(lod: number): void {
    const model = this.model!;
    const stop = stopNear(model.stops, lod, Number.POSITIVE_INFINITY);
    if (stop !== null && stop !== model.seen) this.#goTo(stop);
  }

  protected override goToWorst(lod: number): void {
    const stop = this.#stopAt(lod);
    if (stop !== undefined) this.#goTo(stop);
  }

  protected override worstWords({ name }: Curve, lod: number, value: string): string | null {
    const stop = this.#stopAt(lod);
    if (stop === undefined) return null;
    return t('{name} is beyond its limit at {size}: {value}. Go there.', { name, size: sizeName(stop), value });
  }

  protected override press(event: KeyboardEvent): boolean {
    const { model } = this;
    const seen = model?.seen;
    if (model == null || seen == null) return false;
    const { stops } = model;
    const direction = directionOf(event);
    const last = stops.length - 1;
    if (direction !== undefined) this.#goTo(stops[Math.min(last, Math.max(0, stops.indexOf(seen) + direction))]);
    else if (event.key === 'Home') this.#goTo(stops[0]);
    else if (event.key === 'End') this.#goTo(stops[last]);
    else return false;
    return true;
  }

  #stopAt(lod: number): SizeStop | undefined {
    return this.model?.stops.find((each) => each.lod === lod);
  }

  #goTo(stop: SizeStop): void {
    this.model?.set({ sight: sightOf(stop), cursor: null });
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
