import { html, nothing } from 'lit';
import { kernels } from '../../../core/kernel/table.ts';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { DIFFERENCE_RAMP, SIGNED_RAMP } from '../prints/backdrop.ts';
import { addPrint } from '../prints/print-row.ts';
import { slotName } from '../prints/slot-picture.ts';
import { CODE_SCALE, OKLAB_SCALE } from '../prints/view.ts';
import type { Model } from '../state/model.ts';
import { outputName, outputsOf } from '../state/output.ts';
import { type Against, type Show, type State, slotAgainst } from '../state/state.ts';
import { t } from '../words/t.ts';
import './lamp-pad.ts';
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
} from './parts.ts';

/** How prints are looked at: the view, what stands behind, how texels are magnified, what is compared. */
export class ViewBar extends ModelView<Model> {
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
    const { state, show } = model;
    const { image } = model.seen;
    const output = model.outputAt(image);
    const outputs = outputsOf(model.treatment!, image).map(
      (each) => [each, outputName(each, model.treatment!)] as const,
    );
    return html`
      <span class="heading">${t('Prints')}</span>
      ${outputs.length === 1 ? nothing : choice(t('Output'), output, outputs, (next) => model.set({ output: next }))}
      ${choice(t('View'), show, viewsOf(model), (next) => model.set({ show: next }))}
      ${show === 'difference' ? this.#difference(model) : nothing}
      ${
        show === 'lit'
          ? html`<lamp-pad
              .lamp=${state.lamp}
              @lamp=${(event: CustomEvent<State['lamp']>) => model.set({ lamp: event.detail })}
            ></lamp-pad>`
          : nothing
      }
      ${show === 'overshoot' ? html`<span class="quiet">${t('/ above, \\ below, × clipped')}</span>` : nothing}
      ${show === 'art' ? html`<span class="quiet">${t('· off the palette, ▬ wider, or behind one left out')}</span>` : nothing}
      ${
        showsBackdropChoice(model)
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
      ${
        state.compare === 'beside'
          ? nothing
          : choice(t('with'), chosenAgainst(model, state.partner), againstNames(model), (partner) =>
              model.set({ partner }),
            )
      }
      ${state.compare === 'swap' ? swapButton() : nothing}
      <span class="gap"></span>
      <span class="group ends">
        ${zoomButtons(this.zoom, model.state.zoom, (zoom) => model.set({ zoom }))}
        <select
        aria-label=${t('Add a print by a kernel')}
        @change=${(event: Event) => {
          const list = event.target as HTMLSelectElement;
          addPrint(model, list.value);
          list.value = '';
        }}
      >
        <option value="" selected disabled>${t('+ kernel')}</option>
        ${kernels.map(({ name }) => html`<option value=${name}>${name}</option>`)}
        </select>
      </span>
    `;
  }

  #difference(model: Model) {
    const { metric, against } = model.state;
    const channels = (model.header?.channels ?? 3) >= 3 ? ['r', 'g', 'b', 'a'] : ['r', 'a'];
    const metrics = [['oklab', t('OKLab distance')], ...channels.map((each) => [each, each.toUpperCase()])];
    const most = metric === 'oklab' ? OKLAB_SCALE.toFixed(2) : `+${CODE_SCALE}`;
    return html`
      ${choice(t('from'), chosenAgainst(model, against), againstNames(model), (next) => model.set({ against: next }))}
      ${choice(t('in'), metric, metrics as [State['metric'], string][], (next) => model.set({ metric: next }))}
      <span class="group number quiet">
        ${metric === 'oklab' ? '0' : `−${CODE_SCALE}`}
        <canvas width="96" height="1" data-ramp=${metric === 'oklab' ? 'oklab' : 'signed'} aria-hidden="true"></canvas>
        ${most}
      </span>
    `;
  }

  override updated(): void {
    for (const canvas of this.renderRoot.querySelectorAll<HTMLCanvasElement>('canvas[data-ramp]')) {
      drawRamp(canvas, canvas.dataset.ramp === 'oklab' ? DIFFERENCE_RAMP : SIGNED_RAMP);
    }
  }
}

customElements.define('view-bar', ViewBar);

/** A print that was taken off gives way to the settings' own. */
function chosenAgainst({ state }: Model, against: Against): Against {
  const slot = slotAgainst(against, state.slots);
  return slot === null ? 'source' : slot === state.slots[0] ? 'settings' : `print-${slot.id}`;
}

function againstNames(model: Model): readonly (readonly [Against, string])[] {
  const [, ...others] = model.state.slots;
  return [
    ['source', t('source, area mean')],
    ['settings', t('settings’ print')],
    ...others.map((slot) => [`print-${slot.id}`, slotName(model, slot)] as const),
  ];
}

function viewsOf(model: Model): readonly (readonly [Show, string])[] {
  const { header, treatment } = model;
  if (model.outputAt(model.seen!.image) !== 'image') {
    return [
      ['color', t('codes')],
      ['difference', t('difference')],
    ];
  }
  const normal = treatment?.content === 'normal' || Object.values(treatment?.channels ?? {}).includes('normal');
  return [
    ...pictureViews({
      channels: header?.channels ?? 3,
      content: treatment?.content === 'color' ? 'color' : 'numbers',
      normal: normal ? 'yes' : 'no',
      mask: treatment?.alpha.use === 'mask' ? 'yes' : 'no',
    }),
    ['overshoot', t('overshoot')],
    ...(marksArt(model) ? ([['art', t('off palette, uneven')]] as const) : []),
    ['difference', t('difference')],
  ];
}

/** Whether a print can lose what pixel art has: a palette, or even pixels. */
function marksArt(model: Model): boolean {
  const { state, seen } = model;
  if (model.show === 'art') return true;
  return state.slots.some((slot) => {
    const art = model.told({ kind: 'art', treatment: model.treatmentOf(slot)!, image: seen!.image });
    return (
      art !== null && (art.off !== null || (art.even?.x.uneven.length ?? 0) + (art.even?.y.uneven.length ?? 0) > 0)
    );
  });
}

function showsBackdropChoice(model: Model): boolean {
  const { show } = model;
  return (
    model.outputAt(model.seen!.image) === 'image' &&
    (show === 'color' || show === 'mask') &&
    (model.header?.channels ?? 3) % 2 === 0
  );
}
