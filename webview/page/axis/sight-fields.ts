import { css, html, LitElement, nothing } from 'lit';
import { byteText, figure } from '../../../core/figures.ts';
import { controls } from '../form/controls.ts';
import type { Model } from '../proof/model.ts';
import { meters } from '../words/meters.ts';
import { t } from '../words/t.ts';
import { distanceOf, lodAt } from './lod.ts';
import { readSize } from './scale.ts';
import { sightBetween, sightOf } from './sight.ts';

/** Where the sight stands, as numbers that can be typed. */
export class SightFields extends LitElement {
  static override properties = { model: { attribute: false }, tick: { type: Number } };
  declare model: Model | null;
  declare tick: number;

  static override styles = [
    controls,
    css`
      :host {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 4px 14px;
        padding: 4px 10px 6px;
      }
      input {
        width: 5.4em;
      }
      .size {
        width: 7.4em;
      }
      .small {
        width: 4.4em;
      }
      .gap {
        flex: 1;
      }
    `,
  ];

  constructor() {
    super();
    this.model = null;
    this.tick = 0;
  }

  override render() {
    const { model } = this;
    const seen = model?.seen;
    if (model == null || seen == null) return nothing;
    const { outlook, lens } = model;
    const { width, height } = seen.extent;
    return html`
      <label>
        <span class="quiet">${t('Size')}</span>
        <input
          class="size"
          type="text"
          title=${t('A side such as 48, an extent or cell such as 48x48, or a scale such as 1.5x or 1/3x')}
          .value=${`${width}x${height}`}
          @change=${(event: Event) => this.#typeSize(model, event.target as HTMLInputElement)}
        />
      </label>
      ${
        seen.stop?.kind === 'typed'
          ? html`<button class="plain" @click=${() => removeTyped(model, seen.stop!.label)}>
              ${t('Remove {name}', { name: seen.stop.label })}
            </button>`
          : nothing
      }
      <label>
        <span class="quiet">${t('Level')}</span>
        <input
          class="small"
          type="text"
          inputmode="decimal"
          .value=${figure(seen.lod)}
          @change=${(event: Event) => this.#typeLevel(model, event.target as HTMLInputElement)}
        />
      </label>
      <label>
        <span class="quiet">${t('Seen from')}</span>
        <input
          class="small"
          type="text"
          inputmode="decimal"
          ?disabled=${outlook === null}
          .value=${outlook === null ? '' : meters(distanceOf(seen.lod, outlook))}
          @change=${(event: Event) => this.#typeDistance(model, event.target as HTMLInputElement)}
        />
        <span class="quiet">m</span>
      </label>
      <span class="gap"></span>
      ${this.#number(t('Texels per meter'), outlook?.texelsPerMeter ?? null, 1e-6, 1e9, (value) =>
        model.set({ texelsPerMeter: value }),
      )}
      ${this.#number(t('Field of view'), lens.fovY, 1, 179, (value) => model.set({ fovY: value }), '°')}
      ${this.#number(t('Screen'), lens.screenHeight, 1, 65536, (value) => model.set({ screenHeight: value }), 'px')}
      ${
        seen.stop === null
          ? nothing
          : html`<span class="quiet number" title=${t('Codes of this image, without a file around them')}>${byteText(memoryOf(model))}</span>`
      }
    `;
  }

  #number(
    name: string,
    value: number | null,
    min: number,
    max: number,
    set: (value: number | null) => void,
    unit = '',
  ) {
    return html`<label>
      <span class="quiet">${name}</span>
      <input
        class="small"
        type="text"
        inputmode="decimal"
        .value=${value === null ? '' : figure(value, 3)}
        @change=${(event: Event) => {
          const field = event.target as HTMLInputElement;
          const typed = Number(field.value);
          set(field.value.trim() === '' ? null : typed >= min && typed <= max ? typed : value);
          field.value = value === null ? '' : figure(value, 3);
          this.requestUpdate();
        }}
      />
      ${unit === '' ? nothing : html`<span class="quiet">${unit}</span>`}
    </label>`;
  }

  #typeSize(model: Model, field: HTMLInputElement): void {
    const target = readSize(field.value, model.base!);
    const known = model.stops.find((stop) => {
      if (target === null) return false;
      if (stop.label === target.name && stop.kind !== 'level') return true;
      const same =
        'extent' in target && stop.extent.width === target.extent[0] && stop.extent.height === target.extent[1];
      return same && stop.kind === 'level';
    });
    if (known !== undefined) model.set({ sight: sightOf(known) });
    else if (target !== null) {
      model.set({ typed: [...model.state.typed, target], sight: { kind: 'target', name: target.name } });
    }
    this.#show(field, `${model.seen!.extent.width}x${model.seen!.extent.height}`);
  }

  #typeLevel(model: Model, field: HTMLInputElement): void {
    const typed = Number(field.value.replace(',', '.'));
    if (field.value.trim() !== '' && Number.isFinite(typed)) model.set({ sight: sightBetween(model, typed) });
    this.#show(field, figure(model.seen!.lod));
  }

  #typeDistance(model: Model, field: HTMLInputElement): void {
    const typed = Number(field.value.replace(',', '.'));
    const { outlook } = model;
    if (outlook !== null && typed > 0) model.set({ sight: sightBetween(model, lodAt(typed, outlook)) });
    this.#show(field, outlook === null ? '' : meters(distanceOf(model.seen!.lod, outlook)));
  }

  /** What was typed gives way to what it came to mean. */
  #show(field: HTMLInputElement, text: string): void {
    field.value = text;
  }
}

customElements.define('sight-fields', SightFields);

/** Takes a typed target off the axis; the sight goes to the nearest stop that stays. */
function removeTyped(model: Model, name: string): void {
  const lod = model.seen!.lod;
  const stops = model.stops.filter((stop) => stop.kind !== 'typed' || stop.label !== name);
  const nearest = stops.reduce((best, stop) => (Math.abs(stop.lod - lod) < Math.abs(best.lod - lod) ? stop : best));
  model.set({ typed: model.state.typed.filter((target) => target.name !== name), sight: sightOf(nearest) });
}

function memoryOf(model: Model): number {
  const { width, height } = model.seen!.extent;
  const depth = model.treatment!.depth === 'same' ? model.header!.depth : model.treatment!.depth;
  return (width * height * model.header!.channels * depth) / 8;
}
