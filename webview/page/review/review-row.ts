import { html, nothing } from 'lit';
import { passingCode } from '../../../core/chain/coverage.ts';
import { light, percent } from '../../../core/figures.ts';
import { say } from '../../../core/problem.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { JUST_SEEN } from '../../../core/review/lab.ts';
import type { SizeFigures } from '../../../core/review/sizes.ts';
import type { PairAnswer } from '../../../core/review/want.ts';
import { afterGesture } from '../prints/gesture.ts';
import type { Scene, StageGesture } from '../prints/print-stage.ts';
import { WholeRow } from '../prints/whole-row.ts';
import { t } from '../words/t.ts';
import { type DifferencePicture, differencePicture } from './difference-picture.ts';
import type { ReviewModel } from './model.ts';
import './side-card.ts';
import type { SideFacts } from './side-card.ts';
import { distance } from './sizes.ts';
import { sizeName } from './survival-axis.ts';

/** Before, after and difference at the sight's size, at one place and one zoom. */
export class ReviewPrints extends WholeRow<ReviewModel> {
  #made: { readonly marks: Uint8Array; readonly made: DifferencePicture } | null = null;

  override render() {
    const { model } = this;
    const seen = model?.seen ?? null;
    if (model === null || seen === null) return nothing;
    const pair = model.pair(seen);
    const made = pair === null || 'problem' in pair ? null : pair;
    const problem = pair !== null && 'problem' in pair ? say(pair.problem) : null;
    const cards = [this.#side(model, 'before', made, problem), this.#side(model, 'after', made, problem)];
    if (model.missing('before') === null && model.missing('after') === null) cards.push(this.#difference(model, made));
    return this.row(
      cards.map(
        (facts) => html`<side-card
          role="listitem"
          aria-label=${facts.name}
          .facts=${facts}
          @gesture=${(event: CustomEvent<StageGesture>) => model.set(afterGesture(event.detail) ?? {})}
        ></side-card>`,
      ),
    );
  }

  #side(model: ReviewModel, side: 'before' | 'after', pair: PairAnswer | null, problem: string | null): SideFacts {
    const { open } = model;
    const name = side === 'before' ? t('before') : t('after');
    const label = (side === 'before' ? open?.beforeLabel : open?.afterLabel) ?? '';
    const missing = model.missing(side);
    const nothingThere = { name, label, scene: null, figures: [] };
    if (missing === 'none') {
      const words = side === 'before' ? t('No earlier version: it was added.') : t('Removed.');
      return { ...nothingThere, words, failed: 'no' };
    }
    if (missing !== null) return { ...nothingThere, words: say(missing), failed: 'yes' };
    if (problem !== null) return { ...nothingThere, words: problem, failed: 'yes' };
    const shown = pair?.[side] ?? null;
    if (pair !== null && shown === null) {
      return { ...nothingThere, words: t('The settings name no such size here.'), failed: 'no' };
    }
    const [own, other] = side === 'before' ? [pair?.before, pair?.after] : [pair?.after, pair?.before];
    return {
      name,
      label,
      scene: this.#scene(model, side, own?.picture ?? null, other?.picture ?? null),
      words: pair === null ? t('Computing …') : '',
      failed: 'no',
      figures: shown === null ? [] : figuresOf(shown.figures, pair?.before?.figures ?? null, side),
    };
  }

  #difference(model: ReviewModel, pair: PairAnswer | null): SideFacts {
    const made = pair?.marks == null ? null : this.#pictureOf(pair.marks, pair);
    const scene = this.#scene(model, 'after', made?.picture ?? null, null);
    const difference = pair?.difference ?? null;
    const words =
      pair === null
        ? t('Computing …')
        : difference?.texels === 0
          ? t('Equal at this size.')
          : made?.hidden == null
            ? ''
            : t('/ differs where alpha is 0');
    const figures = difference === null ? [] : differenceFigures(difference);
    const label = t('0 to .100 OKLab, brighter is more');
    return {
      name: t('difference'),
      label,
      scene: {
        ...scene,
        view: { ...scene.view, show: 'color' },
        compare: 'beside',
        magnify: 'nearest',
        marks: made?.hidden ?? null,
      },
      words,
      failed: 'no',
      figures,
    };
  }

  #pictureOf(marks: Uint8Array, { before, after }: PairAnswer): DifferencePicture {
    if (this.#made?.marks !== marks) {
      const { extent } = (after ?? before)!.picture;
      this.#made = { marks, made: differencePicture(marks, extent) };
    }
    return this.#made.made;
  }

  #scene(model: ReviewModel, side: 'before' | 'after', picture: Picture | null, partner: Picture | null): Scene {
    const { state } = model;
    const seen = model.seen!;
    const treatment = model.treatment(side) ?? model.treatment('before') ?? model.treatment('after')!;
    return {
      extent: seen.extent,
      picture,
      reference: null,
      partner,
      compare: state.compare === 'divider' ? 'divider' : this.swapped ? 'partner' : 'beside',
      divider: state.divider,
      view: {
        show: model.show,
        metric: 'oklab',
        blend: treatment.view.blend,
        passing: passingCode(treatment.alpha, picture?.depth ?? 8),
        normalY: treatment.normal.y,
        lamp: state.lamp,
      },
      backdrop: state.backdrop,
      magnify: state.magnify,
      wrap: treatment.wrap,
      tiles: state.tiles,
      zoom: state.zoom,
      pan: state.pan,
      marks: null,
      art: null,
      cursor: picture === null || !this.pointing ? null : cursorOf(model),
      pins: [],
      line: null,
      draws: false,
      label: t('{name} at {size}, {width} by {height} texels. Arrow keys move the cursor.', {
        name: side === 'before' ? t('before') : t('after'),
        size: sizeName(seen),
        ...seen.extent,
      }),
    };
  }
}

customElements.define('review-prints', ReviewPrints);

/** The texel that is read: where the hand is, else where the difference is largest. */
export function cursorOf(model: ReviewModel): { readonly x: number; readonly y: number } {
  const { cursor } = model.state;
  const { extent, size } = model.seen!;
  if (cursor === null) return size.difference?.at ?? { x: 0, y: 0 };
  const at = (share: number, count: number): number => Math.min(count - 1, Math.max(0, Math.floor(share * count)));
  return { x: at(cursor.u, extent.width), y: at(cursor.v, extent.height) };
}

function figuresOf(own: SizeFigures, before: SizeFigures | null, side: 'before' | 'after'): SideFacts['figures'] {
  const figures: { name: string; text: string; over: boolean }[] = [];
  const { width, height } = own.extent;
  figures.push({ name: t('shows'), text: `${width}×${height}`, over: false });
  const add = (name: string, of: (each: SizeFigures) => number | null, format: (value: number) => string): void => {
    const value = of(own);
    if (value === null) return;
    const was = side === 'after' && before !== null ? of(before) : null;
    const change = was === null || was === 0 ? 0 : value / was - 1;
    const signed = Math.abs(change) < 0.0005 ? '' : ` ${change > 0 ? '+' : '−'}${percent(Math.abs(change))}`;
    figures.push({ name, text: format(value) + signed, over: false });
  };
  add(t('coverage'), ({ coverage }) => coverage, percent);
  add(t('luminance'), ({ luminance }) => luminance, light);
  add(t('normal length'), ({ normalLength }) => normalLength, light);
  return figures;
}

function differenceFigures(difference: NonNullable<PairAnswer['difference']>): SideFacts['figures'] {
  const { worst, mean, seen, share, worstCodes } = difference;
  return [
    { name: t('worst'), text: distance(worst), over: worst >= JUST_SEEN },
    { name: t('mean'), text: distance(mean), over: false },
    { name: t('seen'), text: percent(seen), over: false },
    { name: t('changed'), text: percent(share), over: false },
    { name: t('worst code'), text: worstCodes.toFixed(0), over: false },
  ];
}
