import { css, html, LitElement, nothing } from 'lit';
import { light } from '../../../core/figures.ts';
import type { Slot } from '../../../core/proof/slot.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { controls } from '../form/controls.ts';
import { colorDistance } from '../prints/view.ts';
import { isProblem } from '../proof/bench-link.ts';
import type { Model } from '../proof/model.ts';
import type { State } from '../proof/state.ts';
import { changeWords } from '../treatment/change-words.ts';
import { t } from '../words/t.ts';
import './footprint-plot.ts';
import { cursorTexel, lineOf } from './line.ts';
import { type Letter, printTrack, type Section, sectionCsv, sourceTrack } from './section.ts';
import './section-plot.ts';
import { readTexel, type TexelReading, texelText } from './texel.ts';

/** What is under the cursor, as numbers: the texel, where it comes from, and a cut through source and prints. */
export class ReadingsStrip extends LitElement {
  static override properties = { model: { attribute: false }, tick: { type: Number }, letter: { state: true } };
  declare model: Model | null;
  declare tick: number;
  declare letter: Letter;

  static override styles = [
    controls,
    css`
      /* Lines between sections are the ground that shows through, however they wrap. */
      :host {
        display: flex;
        flex-wrap: wrap;
        gap: 1px;
        border-top: 1px solid var(--proof-line);
        background: var(--proof-line);
      }
      section {
        padding: 6px 10px 8px;
        min-width: min(100%, 12em);
        background: var(--proof-ground);
      }
      .texel {
        flex: 115 1 25em;
      }
      .footprint {
        flex: 70 1 17em;
      }
      .cut {
        flex: 160 1 26em;
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
      tr.chosen th {
        font-weight: 600;
      }
      .wide {
        overflow-x: auto;
      }
    `,
  ];

  constructor() {
    super();
    this.model = null;
    this.tick = 0;
    this.letter = 'g';
  }

  override render() {
    const { model } = this;
    if (model === null || model.seen === null || model.treatment === null) return nothing;
    const { extent, image } = model.seen;
    const texel = cursorTexel(model.state.cursor, extent);
    const readings = readingsOf(model, texel.y * extent.width + texel.x);
    const place = t('texel {x}, {y} of {width}×{height}', { ...texel, ...extent });
    const own = model.treatmentOf(model.slot)!;
    const footprint = model.told({ kind: 'footprint', treatment: own, image, ...texel });
    const section = this.#section(model);
    return html`
      <section class="texel" aria-label=${t('Texel')}>
        <header>
          <span class="heading">${t('Texel')}</span>
          <span class="number">${texel.x}, ${texel.y}</span>
          <span class="gap"></span>
          <button class="plain" @click=${() => copy(model, texelText(place, readings))}>${t('Copy')}</button>
        </header>
        <div class="wide" tabindex="0" role="region" aria-label=${t('Codes of the texel by print')}>
          <table>
            <thead>
              <tr>
                <th scope="col">${t('print')}</th>
                <th scope="col">${t('code')}</th>
                <th scope="col">${model.treatment.content === 'color' ? t('linear light') : t('share')}</th>
                <th scope="col">${t('ΔOK')}</th>
              </tr>
            </thead>
            <tbody>
              ${readings.map(
                ({ name, codes, linear, distance, selected }) => html`<tr class=${selected ? 'chosen' : ''}>
                  <th scope="row">${name}</th>
                  <td class="number" data-codes=${codes.join(' ')}>${codes.join(' ')}</td>
                  <td class="number">${linear.map(light).join(' ')}</td>
                  <td class="number">${distance === null ? '' : distance.toFixed(3)}</td>
                </tr>`,
              )}
            </tbody>
          </table>
        </div>
        <p class="unseen" aria-live="polite">${place}: ${readings[0]?.codes.join(' ') ?? ''}</p>
      </section>
      <section class="footprint" aria-label=${t('Footprint')}>
        <header><span class="heading">${t('Footprint')}</span><span class="quiet">${kernelName(model.slot, model)}</span></header>
        <footprint-plot .footprint=${footprint} .why=${whyNoWeights(model)}></footprint-plot>
      </section>
      <section class="cut" aria-label=${t('Cross-section')}>
        <header>
          <span class="heading">${t('Cross-section')}</span>
          ${this.#lineChoice(model)} ${this.#letterChoice(model)}
          <span class="gap"></span>
          <button
            class="plain"
            ?disabled=${section === null}
            @click=${() => section !== null && copy(model, sectionCsv(section))}
          >
            ${t('Copy CSV')}
          </button>
        </header>
        <section-plot .section=${section} .cursor=${cursorShare(model.state)}></section-plot>
      </section>
    `;
  }

  #section(model: Model): Section | null {
    const { extent } = model.seen!;
    const line = lineOf(model.state, extent);
    const answer = model.told({ kind: 'section', ...line });
    if (answer === null) return null;
    const prints = model.state.slots.flatMap((slot) => {
      const picture = pictureOf(model, slot);
      if (picture === null) return [];
      const marks = model.halo(model.treatmentOf(slot)!, model.seen!.image)?.marks ?? null;
      const print = { name: nameOf(slot, model), selected: slot.id === model.state.selected, picture, marks };
      return [printTrack(print, line, this.letter)];
    });
    return { source: sourceTrack(t('source'), answer, this.letter), prints };
  }

  #lineChoice(model: Model) {
    const names: readonly (readonly [State['line'], string])[] = [
      ['row', t('row')],
      ['column', t('column')],
      ['drawn', t('a line drawn on a print')],
    ];
    return html`<select
      aria-label=${t('Along')}
      .value=${model.state.line}
      @change=${(event: Event) => model.set({ line: (event.target as HTMLSelectElement).value as State['line'] })}
    >
      ${names.map(([each, text]) => html`<option value=${each} ?selected=${each === model.state.line}>${text}</option>`)}
    </select>`;
  }

  #letterChoice(model: Model) {
    const channels = model.header?.channels ?? 3;
    const letters: readonly Letter[] = channels >= 3 ? ['r', 'g', 'b'] : ['g'];
    const all = channels % 2 === 0 ? [...letters, 'a' as const] : letters;
    return html`<select
      aria-label=${t('Channel')}
      .value=${this.letter}
      @change=${(event: Event) => {
        this.letter = (event.target as HTMLSelectElement).value as Letter;
      }}
    >
      ${all.map((each) => html`<option value=${each} ?selected=${each === this.letter}>${channelName(each, channels)}</option>`)}
    </select>`;
  }
}

customElements.define('readings-strip', ReadingsStrip);

function readingsOf(model: Model, texel: number): readonly TexelReading[] {
  const [first] = model.state.slots;
  const base = pictureOf(model, first);
  return model.state.slots.flatMap((slot) => {
    const picture = pictureOf(model, slot);
    if (picture === null) return [];
    const distance = slot === first || base === null ? null : colorDistance(picture, base)(texel);
    return [
      { name: nameOf(slot, model), selected: slot.id === model.state.selected, distance, ...readTexel(picture, texel) },
    ];
  });
}

function pictureOf(model: Model, slot: Slot): Picture | null {
  const told = model.print(model.treatmentOf(slot)!, model.seen!.image);
  return told === undefined || isProblem(told) ? null : told.picture;
}

function whyNoWeights(model: Model): string {
  if (model.seen!.stop === null)
    return t('Between levels a sampler blends two of them. Each level has weights of its own.');
  if (model.treatment!.grid !== null) return t('Cells of a sheet are made one by one; weights are not shown for them.');
  return t('This print has no fixed weights: its texels are chosen by their codes.');
}

/** A print's name in a table: its kernel, and what it changes. */
export function nameOf(slot: Slot, model: Model): string {
  return [kernelName(slot, model), ...changeWords(slot.change)].join(', ');
}

function kernelName(slot: Slot, model: Model): string {
  const { kernel } = model.treatmentOf(slot)!;
  return (slot.kernel ?? (model.seen!.lod < 0 ? kernel.magnify : kernel.minify)).name;
}

function cursorShare({ line, cursor }: State): number {
  return line === 'row' ? cursor.u : line === 'column' ? cursor.v : 0.5;
}

function channelName(letter: Letter, channels: number): string {
  if (letter === 'a') return t('alpha');
  if (channels < 3) return t('gray');
  return { r: t('red'), g: t('green'), b: t('blue') }[letter];
}

async function copy(model: Model, text: string): Promise<void> {
  const { reply } = await model.link.ask('copy', { text });
  model.say(
    'problem' in reply
      ? { text: t('The text could not be copied.'), kind: 'failed' }
      : { text: t('Copied.'), kind: 'said' },
  );
}
