import { html, nothing } from 'lit';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { DIFFERENCE_RAMP } from '../prints/backdrop.ts';
import '../view/lamp-pad.ts';
import {
  backdropNames,
  choice,
  compareNames,
  drawRamp,
  magnifyNames,
  pictureViews,
  swapButton,
  viewStyles,
  zoomButtons,
} from '../view/parts.ts';
import { t } from '../words/t.ts';
import type { ReviewModel } from './model.ts';
import type { ReviewShow, ReviewState } from './state.ts';

/** How the two versions are looked at. */
export class ReviewBar extends ModelView<ReviewModel> {
  static override properties = { zoom: { type: Number } };
  /** Device pixels a texel, as shown. */
  declare zoom: number;

  static override styles = [controls, viewStyles];

  constructor() {
    super();
    this.zoom = 1;
  }

  override render() {
    const { model } = this;
    if (model === null || model.seen === null) return nothing;
    const { state } = model;
    const views = viewsOf(model);
    const { show } = model;
    const hasBackdrop = (show === 'color' || show === 'mask') && channelsOf(model) % 2 === 0;
    return html`
      <span class="heading">${t('Prints')}</span>
      ${choice(t('View'), show, views, (next) => model.set({ show: next }))}
      ${
        show === 'lit'
          ? html`<lamp-pad
              .lamp=${state.lamp}
              @lamp=${(event: CustomEvent<ReviewState['lamp']>) => model.set({ lamp: event.detail })}
            ></lamp-pad>`
          : nothing
      }
      ${
        hasBackdrop
          ? choice(t('Backdrop'), state.backdrop, backdropNames(), (backdrop) => model.set({ backdrop }))
          : nothing
      }
      ${choice(t('Texels'), state.magnify, magnifyNames(), (magnify) => model.set({ magnify }))}
      <button
        aria-pressed=${state.tiles}
        title=${t('Nine copies, as a repeating surface shows them')}
        @click=${() => model.set({ tiles: !state.tiles })}
      >
        3×3
      </button>
      ${choice(t('Compare'), state.compare, compareNames(), (compare) => model.set({ compare }))}
      ${state.compare === 'swap' ? swapButton() : nothing}
      <span class="gap"></span>
      <span class="group number quiet">
        0 <canvas width="96" height="1" data-ramp="oklab" aria-hidden="true"></canvas> .100
      </span>
      ${zoomButtons(this.zoom, state.zoom, (zoom) => model.set({ zoom }))}
    `;
  }

  override updated(): void {
    for (const canvas of this.renderRoot.querySelectorAll<HTMLCanvasElement>('canvas[data-ramp]')) {
      drawRamp(canvas, DIFFERENCE_RAMP);
    }
  }
}

customElements.define('review-bar', ReviewBar);

function channelsOf({ review }: ReviewModel): number {
  return (review?.after ?? review?.before)?.channels ?? 3;
}

function viewsOf(model: ReviewModel) {
  const treatment = model.treatment('after') ?? model.treatment('before');
  const normal = treatment?.content === 'normal' || Object.values(treatment?.channels ?? {}).includes('normal');
  const views = pictureViews({
    channels: channelsOf(model),
    content: treatment?.content === 'color' ? 'color' : 'numbers',
    normal: normal ? 'yes' : 'no',
    mask: treatment?.alpha.use === 'mask' ? 'yes' : 'no',
  });
  return views as readonly (readonly [ReviewShow, string])[];
}
