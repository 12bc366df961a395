import { css, html, nothing } from 'lit';
import { say } from '../../../core/problem.ts';
import '../axis/sight-fields.ts';
import '../axis/size-axis.ts';
import type { PrintCard } from '../prints/print-card.ts';
import '../prints/print-row.ts';
import type { PrintRow } from '../prints/print-row.ts';
import type { PrintStage } from '../prints/print-stage.ts';
import '../readings/readings-strip.ts';
import '../treatment/treatment-switches.ts';
import '../view/view-bar.ts';
import type { Model } from '../state/model.ts';
import { disagreementNote, goneNote, loadingNote, type Note, noteOf, settingsNote } from '../state/note.ts';
import { t } from '../words/t.ts';
import './top-bar.ts';
import { wantsOf } from '../state/wants.ts';
import { pageStyles, WholePage } from './whole-page.ts';

/** The whole page: one axis, one row of prints, one strip of readings. */
export class ProofPage extends WholePage<Model> {
  static override styles = [
    pageStyles,
    css`
      :host {
        grid-template-rows: auto auto auto auto auto minmax(round(17em, 1px), 1fr) auto auto;
      }
      .note {
        grid-row: 2 / -1;
      }
      .banner {
        display: flex;
        align-items: center;
        gap: 12px;
        padding: 5px 10px;
        border-bottom: 1px solid var(--proof-line);
        color: var(--proof-warning);
      }
    `,
  ];

  override render() {
    const { model, tick } = this;
    if (model === null) return nothing;
    const note = this.#wholeNote(model);
    return html`
      <top-bar .model=${model} .tick=${tick} role="banner"></top-bar>
      ${note === null ? this.#proof(model) : this.#note(model, note)}
    `;
  }

  #wholeNote(model: Model): Note | null {
    const { problem, settings } = model;
    if (problem !== null) return noteOf(problem);
    if (settings !== null && settings.treatment === null) return settingsNote(settings.problems[0]);
    return model.seen === null ? loadingNote() : null;
  }

  #note(model: Model, note: Note) {
    return html`<main class="note" data-state=${note.state}>
      <p role=${note.state === 'loading' ? 'status' : 'alert'}>${note.text}</p>
      ${this.#action(model, note)}
    </main>`;
  }

  #action(model: Model, { action }: Note) {
    switch (action) {
      case 'again':
        return html`<button class="main" @click=${() => model.start()}>${t('Read the file again')}</button>`;
      case 'settings':
        return html`<button class="main" @click=${() => model.link.ask('showSettings', { key: null })}>
          ${t('Show the settings')}
        </button>`;
      case null:
        return nothing;
    }
  }

  #proof(model: Model) {
    const { tick } = this;
    const { disagreement } = model.takeover;
    const notes = [
      ...(model.present ? [] : [goneNote(model.open!.name)]),
      ...(disagreement === null ? [] : [disagreementNote(disagreement)]),
    ];
    return html`
      <div>
        ${notes.map(
          (note) =>
            html`<div class="banner" role="alert" data-state=${note.state}>${note.text} ${this.#action(model, note)}</div>`,
        )}
      </div>
      <section class="axis" aria-label=${t('Size axis')}>
        <size-axis .model=${model} .tick=${tick}></size-axis>
        <sight-fields .model=${model} .tick=${tick}></sight-fields>
      </section>
      <treatment-switches .model=${model} .tick=${tick} role="region" aria-label=${t('What if')}></treatment-switches>
      <view-bar
        .model=${model}
        .tick=${tick}
        .zoom=${this.zoom}
        role="region"
        aria-label=${t('View')}
        @swap-hold=${(event: CustomEvent<'down' | 'up'>) => this.swap(event.detail)}
      ></view-bar>
      <main aria-label=${t('Prints')}>
        <print-row .model=${model} .tick=${tick} .swapped=${this.swapped}></print-row>
      </main>
      <readings-strip .model=${model} .tick=${tick} role="region" aria-label=${t('Readings')}></readings-strip>
      <footer class="foot">${this.#footWords(model).map((each) => html`<span>${each}</span>`)}</footer>
    `;
  }

  #footWords(model: Model): readonly string[] {
    const ratio = window.devicePixelRatio;
    const { treatment, header } = model;
    const words = [t('Codes are shown as sRGB; what they look like depends on the screen.')];
    if (model.open?.remark != null) words.unshift(model.open.remark);
    if (ratio !== 1) words.push(t('One CSS pixel is {ratio} device pixels.', { ratio: Number(ratio.toFixed(3)) }));
    if ((header?.channels ?? 3) % 2 === 0) {
      words.push(
        treatment?.view.blend === 'code' ? t('Backdrops blend in code space.') : t('Backdrops blend in linear light.'),
      );
    }
    if (model.slow !== null) words.push(say(model.slow));
    return words;
  }

  protected override want(model: Model): void {
    model.want(wantsOf(model));
  }

  protected override stage(): PrintStage | null {
    const row = this.renderRoot.querySelector<PrintRow>('print-row');
    const card = row?.renderRoot.querySelector<PrintCard>('print-card');
    return card?.renderRoot.querySelector<PrintStage>('print-stage') ?? null;
  }
}

customElements.define('proof-page', ProofPage);
