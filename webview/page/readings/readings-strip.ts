import { css, html, nothing } from 'lit';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import type { Model } from '../state/model.ts';
import type { State } from '../state/state.ts';
import { t } from '../words/t.ts';
import { copy } from './copy.ts';
import './footprint-plot.ts';
import { cursorTexel, lineOf } from '../state/line.ts';
import { type Letter, printTrack, type Section, sectionCsv, sourceTrack } from './section.ts';
import { weightsCsv } from './weights.ts';
import './section-plot.ts';
import { slotKernel, slotName, slotPicture } from '../prints/slot-picture.ts';
import './texel-readings.ts';

/** What is under the cursor, as numbers: the texel, where it comes from, and a cut through source and prints. */
export class ReadingsStrip extends ModelView<Model> {
  static override properties = { letter: { state: true } };
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
      section,
      texel-readings {
        padding: 6px 10px 8px;
        min-width: min(100%, 12em);
        background: var(--proof-ground);
      }
      texel-readings {
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
    `,
  ];

  constructor() {
    super();
    this.letter = 'g';
  }

  override render() {
    const { model } = this;
    if (model === null || model.seen === null || model.treatment === null) return nothing;
    const { extent, image } = model.seen;
    const texel = cursorTexel(model.state.cursor, extent);
    const own = model.treatmentOf(model.slot)!;
    const footprint = model.told({ kind: 'footprint', treatment: own, image, ...texel });
    const section = this.#section(model);
    return html`
      <texel-readings .model=${model} .tick=${this.tick}></texel-readings>
      <section class="footprint" aria-label=${t('Footprint')}>
        <header><span class="heading">${t('Footprint')}</span><span class="quiet">${slotKernel(model, model.slot)}</span>
          <span class="gap"></span>
          <button
            class="plain"
            aria-label=${t('Copy CSV of the weights')}
            ?disabled=${footprint?.axes == null}
            @click=${() => footprint?.axes != null && copy(model, weightsCsv(footprint.axes))}
          >
            ${t('Copy CSV')}
          </button></header>
        <footprint-plot .footprint=${footprint} .why=${whyNoWeights(model)}></footprint-plot>
      </section>
      <section class="cut" aria-label=${t('Cross-section')}>
        <header>
          <span class="heading">${t('Cross-section')}</span>
          ${this.#lineChoice(model)} ${this.#letterChoice(model)}
          <span class="gap"></span>
          <button
            class="plain"
            aria-label=${t('Copy CSV of the cross-section')}
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
      const picture = slotPicture(model, slot, model.seen!.image);
      if (picture === null) return [];
      const marks = model.marks(model.treatmentOf(slot)!, model.seen!.image);
      const print = { name: slotName(model, slot), selected: slot.id === model.state.selected, picture, marks };
      return [printTrack(print, line, this.letter)];
    });
    // The source of roughness is another file.
    const source =
      model.outputAt(model.seen!.image) === 'roughness' ? null : sourceTrack(t('source'), answer, this.letter);
    return { source, prints };
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
    const rough = model.outputAt(model.seen!.image) === 'roughness';
    const channels = rough ? 1 : (model.header?.channels ?? 3);
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

function whyNoWeights(model: Model): string {
  if (model.seen!.stop === null)
    return t('Between levels a sampler blends two of them. Each level has weights of its own.');
  if (model.treatment!.grid !== null) return t('Cells of a sheet are made one by one; weights are not shown for them.');
  return t('This print has no fixed weights: its texels are chosen by their codes.');
}

function cursorShare({ line, cursor }: State): number {
  return line === 'row' ? cursor.u : line === 'column' ? cursor.v : 0.5;
}

function channelName(letter: Letter, channels: number): string {
  if (letter === 'a') return t('alpha');
  if (channels < 3) return t('gray');
  return { r: t('red'), g: t('green'), b: t('blue') }[letter];
}
