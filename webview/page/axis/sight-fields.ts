import { css, html, nothing } from 'lit';
import { byteText, figure } from '../../../core/figures.ts';
import type { Target } from '../../../core/treatment/treatment.ts';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import type { Model } from '../state/model.ts';
import { meters } from '../words/meters.ts';
import { t } from '../words/t.ts';
import './level-table.ts';
import { distanceOf, lodAt } from '../state/lod.ts';
import { readSizes, type Stop } from '../state/scale.ts';
import { memoryOf } from './memory.ts';
import { sightBetween, sightOf } from './sight.ts';

/** Where the sight stands, as numbers that can be typed. */
export class SightFields extends ModelView<Model> {
  static override properties = { open: { state: true } };
  /** Whether the table of the axis is shown: it is made only then. */
  declare open: boolean;

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
      level-table {
        flex: 1 1 100%;
        padding: 0;
      }
    `,
  ];

  constructor() {
    super();
    this.open = false;
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
          title=${t('A side such as 48, an extent or cell such as 48x48, a scale such as 1.5x or 1/3x, or several scales: 1x 1.5x 2x')}
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
          : html`<span class="quiet number" title=${t('Codes of this image, without a file around them')}>${byteText(memoryOf(model, seen.extent))}</span>`
      }
      <button class="plain" aria-expanded=${this.open} @click=${this.#toggle}>${t('Table')}</button>
      ${this.open ? html`<level-table .model=${model} .tick=${this.tick}></level-table>` : nothing}
    `;
  }

  #toggle(): void {
    this.open = !this.open;
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
    const targets = readSizes(field.value, model.base!) ?? [];
    const strangers = targets.filter((target) => stopOf(model, target) === undefined);
    const [first] = targets;
    if (first !== undefined) {
      const known = stopOf(model, first);
      const sight = known === undefined ? ({ kind: 'target', name: first.name } as const) : sightOf(known);
      model.set({ typed: [...model.state.typed, ...strangers], sight });
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

/** The stop that a typed size comes to: a target of its name, or a level of its extent. */
function stopOf(model: Model, target: Target): Stop | undefined {
  return model.stops.find(({ kind, label, extent }) => {
    if (kind !== 'level') return label === target.name;
    return 'extent' in target && extent.width === target.extent[0] && extent.height === target.extent[1];
  });
}

/** Takes a typed target off the axis; the sight goes to the nearest stop that stays. */
function removeTyped(model: Model, name: string): void {
  const lod = model.seen!.lod;
  const stops = model.stops.filter((stop) => stop.kind !== 'typed' || stop.label !== name);
  const nearest = stops.reduce((best, stop) => (Math.abs(stop.lod - lod) < Math.abs(best.lod - lod) ? stop : best));
  model.set({ typed: model.state.typed.filter((target) => target.name !== name), sight: sightOf(nearest) });
}
