import { css, html, nothing } from 'lit';
import { light } from '../../../core/figures.ts';
import type { PrintImage } from '../../../core/proof/want.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { slotName, slotPicture } from '../prints/slot-picture.ts';
import { colorDistance } from '../prints/view.ts';
import { cursorTexel } from '../state/line.ts';
import type { Model } from '../state/model.ts';
import { letGo, pinnedAt, pinsOf, togglePin } from '../state/pin.ts';
import { t } from '../words/t.ts';
import { copy } from './copy.ts';
import { readTexel, type TexelPlace, type TexelReading, texelCsv, texelText } from './texel.ts';

/** The texel under the cursor as each print has it, and below it those that are pinned. */
export class TexelReadings extends ModelView<Model> {
  static override styles = [
    controls,
    css`
      :host {
        display: block;
      }
      header {
        display: flex;
        align-items: center;
        flex-wrap: wrap;
        gap: 4px 8px;
        min-height: 1.85em;
        margin-bottom: 4px;
      }
      .gap {
        flex: 1;
      }
      /* Pins scroll in the room that the other readings take anyway, so that the prints stay as large as they are. */
      .wide {
        overflow: auto;
        max-height: 11.5em;
      }
      table {
        border-collapse: collapse;
        width: 100%;
      }
      th,
      td {
        text-align: left;
        font-weight: 400;
        padding: 1px 10px 1px 0;
        white-space: nowrap;
      }
      thead th {
        color: var(--proof-quiet);
      }
      tbody th {
        white-space: normal;
        min-width: 6.8em;
      }
      tbody + tbody {
        border-top: 1px solid var(--proof-line);
      }
      tr.chosen th[scope='row'] {
        font-weight: 600;
      }
      .tag {
        display: inline-block;
        min-width: 1.35em;
        margin-right: 4px;
        text-align: center;
        border: 1px solid var(--proof-strong-line);
      }
      .let-go {
        height: auto;
        padding: 0 5px;
      }
    `,
  ];

  override render() {
    const { model } = this;
    if (model === null || model.seen === null || model.treatment === null) return nothing;
    const cursor = cursorTexel(model.state.cursor, model.seen.extent);
    const here = placeAt(model, { image: model.seen.image, extent: model.seen.extent, ...cursor }, null);
    const pins = pinsOf(model).map((pin) => ({ ...placeAt(model, pin, pin.number), image: pin.name }));
    const places = [here, ...pins];
    const words = placeWords(model, here);
    const pinned = pinnedAt(model, cursor);
    const text = (): string => texelText(places, (place) => placeWords(model, place));
    return html`<section aria-label=${t('Texel')}>
      <header>
        <span class="heading">${t('Texel')}</span>
        <span class="number">${cursor.x}, ${cursor.y}</span>
        <span class="gap"></span>
        <button
          class="plain"
          title=${t('Or the key P, or a double click, on a print')}
          @click=${() => togglePin(model)}
        >
          ${pinned === null ? t('Pin') : t('Let go')}
        </button>
        <button class="plain" @click=${() => copy(model, text())}>${t('Copy')}</button>
        <button class="plain" aria-label=${t('Copy CSV of the texels')} @click=${() => copy(model, texelCsv(places))}>
          ${t('Copy CSV')}
        </button>
      </header>
      <div class="wide" tabindex="0" role="region" aria-label=${t('Codes of the texel by print')}>
        <table>
          <thead>
            <tr>
              <th scope="col">${t('print')}</th>
              <th scope="col">${t('code')}</th>
              <th scope="col">${model.treatment.content === 'color' ? t('linear light') : t('share')}</th>
              <th scope="col" title=${t('OKLab distance from the settings’ print')}>${t('ΔOK')}</th>
              ${pins.length === 0 ? nothing : html`<th scope="col">${t('from cursor')}</th>`}
            </tr>
          </thead>
          <tbody>
            ${here.readings.map((reading) => this.#row(reading, pins.length))}
          </tbody>
          ${pins.map((place) => this.#pinned(model, place, pins.length))}
        </table>
      </div>
      <p class="unseen" aria-live="polite">
        ${words}: ${here.readings[0]?.codes.join(' ') ?? ''}${pinned === null ? '' : `. ${t('Pinned as {number}.', { number: pinned })}`}
      </p>
    </section>`;
  }

  #pinned(model: Model, place: TexelPlace, pins: number) {
    const { pin, x, y, image } = place;
    return html`<tbody data-pin=${pin}>
      <tr>
        <th scope="rowgroup" colspan=${pins === 0 ? 4 : 5}>
          <span class="tag number">${pin}</span><span class="number">${x}, ${y}</span>
          <span class="quiet">${image}</span>
          <button
            class="plain let-go"
            aria-label=${t('Let go of pin {number}', { number: pin! })}
            title=${t('Let go')}
            @click=${() => letGo(model, pin!)}
          >
            ×
          </button>
        </th>
      </tr>
      ${place.readings.map((reading) => this.#row(reading, pins))}
    </tbody>`;
  }

  #row({ name, codes, linear, distance, fromCursor, selected }: TexelReading, pins: number) {
    return html`<tr class=${selected ? 'chosen' : ''}>
      <th scope="row">${name}</th>
      <td class="number" data-codes=${codes.join(' ')}>${codes.join(' ')}</td>
      <td class="number">${linear.map(light).join(' ')}</td>
      <td class="number">${distance?.toFixed(3) ?? ''}</td>
      ${pins === 0 ? nothing : html`<td class="number">${fromCursor?.toFixed(3) ?? ''}</td>`}
    </tr>`;
  }
}

customElements.define('texel-readings', TexelReadings);

interface Texel {
  readonly image: PrintImage;
  readonly extent: Extent;
  readonly x: number;
  readonly y: number;
}

function placeAt(model: Model, { image, extent, x, y }: Texel, pin: number | null): TexelPlace {
  const { state, seen } = model;
  const texel = y * extent.width + x;
  const cursor = cursorTexel(state.cursor, seen!.extent);
  const cursorAt = cursor.y * seen!.extent.width + cursor.x;
  const base = slotPicture(model, state.slots[0], image);
  const readings = state.slots.flatMap((slot, index): TexelReading[] => {
    const picture = slotPicture(model, slot, image);
    if (picture === null) return [];
    const under = pin === null ? null : slotPicture(model, slot, seen!.image);
    return [
      {
        name: slotName(model, slot),
        selected: slot.id === state.selected,
        distance: index === 0 || base === null ? null : colorDistance(picture, base)(texel),
        fromCursor: under === null ? null : colorDistance(picture, under)(texel, cursorAt),
        ...readTexel(picture, texel),
      },
    ];
  });
  const { stop, lod } = seen!;
  return { pin, image: stop?.label ?? String(lod), x, y, readings };
}

function placeWords(model: Model, { pin, image, x, y }: TexelPlace): string {
  return pin === null
    ? t('texel {x}, {y} of {width}×{height}', { x, y, ...model.seen!.extent })
    : t('pin {pin}: texel {x}, {y}, {image}', { pin, x, y, image });
}
