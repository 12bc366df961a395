import type { Picture } from '../../../core/proof/want.ts';
import { isProblem } from '../state/bench-link.ts';
import { distanceOf } from '../state/lod.ts';
import type { Model } from '../state/model.ts';
import { type Stop, stopNear } from '../state/scale.ts';
import { meters } from '../words/meters.ts';
import { t } from '../words/t.ts';
import type { Curve } from './curve.ts';
import { curvesOf } from './curves.ts';
import { isShipped } from './rows.ts';
import { goToWorst, sightBetween, sightOf, stepFrom, valueText } from './sight.ts';
import { type AxisFacts, directionOf, WholeAxis } from './whole-axis.ts';

/** CSS pixels within which the sight falls to a stop. */
const SNAP = 7;

/** The size axis of a proof: levels and targets, what is measured on them, and a sight that may rest between levels. */
export class SizeAxis extends WholeAxis<Stop> {
  declare model: Model | null;
  protected override readonly nameWidth = 96;

  constructor() {
    super();
    this.model = null;
  }

  protected override facts(): AxisFacts<Stop> | null {
    const { model } = this;
    const seen = model?.seen ?? null;
    if (model === null || seen === null) return null;
    const { stops, outlook, treatment, state } = model;
    const { stop } = seen;
    return {
      stops,
      curves: curvesOf(model),
      lod: seen.lod,
      here: stops.find(({ kind, label }) => kind === stop?.kind && label === stop.label) ?? null,
      words: valueText(model),
      thumbs: t('true size'),
      distance: outlook === null ? null : ({ lod }) => meters(distanceOf(lod, outlook)),
      treatment,
      backdrop: state.backdrop,
    };
  }

  protected override pictureAt({ image }: Stop): Picture | null {
    const model = this.model!;
    if ('level' in image) return model.levels()?.levels.find(({ level }) => level === image.level)?.cut ?? null;
    const told = model.imagePrint(model.treatment!, image);
    return told === undefined || isProblem(told) ? null : told.picture;
  }

  protected override ships(stop: Stop): boolean {
    return isShipped(this.model!.treatment!, stop);
  }

  protected override moveTo(lod: number, level: number): void {
    const model = this.model!;
    const stop = stopNear(model.stops, lod, SNAP / level);
    const sight = stop === null ? sightBetween(model, lod) : sightOf(stop);
    if (JSON.stringify(sight) !== JSON.stringify(model.state.sight)) model.set({ sight });
  }

  protected override goToWorst(lod: number): void {
    goToWorst(this.model!, lod);
  }

  protected override worstWords({ name }: Curve, level: number, value: string): string {
    return t('{name} is beyond its limit at level {level}: {value}. Go there.', { name, level, value });
  }

  protected override press(event: KeyboardEvent): boolean {
    const { model } = this;
    const seen = model?.seen;
    if (model == null || seen == null) return false;
    const { stops } = model;
    const direction = directionOf(event);
    if (direction !== undefined && event.shiftKey) model.set({ sight: sightBetween(model, seen.lod + direction / 20) });
    else if (direction !== undefined) model.set({ sight: sightOf(stepFrom(stops, seen, direction)) });
    else if (event.key === 'Home') model.set({ sight: sightOf(stops[0]) });
    else if (event.key === 'End') model.set({ sight: sightOf(stops[stops.length - 1]) });
    else return false;
    return true;
  }
}

customElements.define('size-axis', SizeAxis);
