import { css, html, nothing } from 'lit';
import { say } from '../../../core/problem.ts';
import type { AdoptChange, ExportOrder, HostCall, Question } from '../../../core/protocol.ts';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { exportProof } from '../state/export-proof.ts';
import type { Model } from '../state/model.ts';
import { adoptable } from '../treatment/change.ts';
import { t } from '../words/t.ts';

/** What the file is, what the settings make of it, whether that is built, and the page's three actions. */
export class TopBar extends ModelView<Model> {
  static override properties = { busy: { state: true } };
  /** The call that is being answered. */
  declare busy: HostCall | null;

  static override styles = [
    controls,
    css`
      :host {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 4px 14px;
        padding: 6px 10px;
        border-bottom: 1px solid var(--proof-line);
      }
      h1 {
        margin: 0;
        font-size: 1.1em;
        font-weight: 600;
      }
      .gap {
        flex: 1;
      }
      .stale {
        color: var(--proof-warning);
      }
      .failed {
        color: var(--proof-error);
      }
      button.link {
        padding: 0;
        height: auto;
        border: 0;
        background: none;
        color: var(--proof-link);
      }
      button.link:hover:not(:disabled) {
        background: none;
        text-decoration: underline;
      }
      .group {
        display: inline-flex;
        gap: 4px;
        flex-wrap: wrap;
      }
    `,
  ];

  constructor() {
    super();
    this.busy = null;
  }

  override render() {
    const { model } = this;
    if (model?.open == null) return html`<h1>${t('Proof')}</h1>`;
    const { open, header, note } = model;
    return html`
      <h1>${open.name}</h1>
      ${header === null ? nothing : html`<span class="number">${header.extent.width}×${header.extent.height}</span>`}
      ${header === null ? nothing : html`<span class="quiet">${this.#facts(model)}</span>`}
      ${this.#treatment(model)}
      <span class=${model.built.kind === 'stale' ? 'stale' : 'quiet'} data-built=${model.built.kind}>${builtWords(model)}</span>
      <span class="gap"></span>
      <span class=${note?.kind === 'failed' ? 'failed' : 'quiet'} role="status">${note?.text ?? ''}</span>
      <span class="group">
        ${this.#about(model)} ${this.#adopt(model)} ${this.#export(model)} ${this.#build(model)}
      </span>
      ${typeof open.abilities.build === 'string' ? html`<span class="quiet why">${open.abilities.build}</span>` : nothing}
    `;
  }

  #facts(model: Model): string {
    const { header, treatment } = model;
    const words = [t('{depth} bits', { depth: header!.depth }), CHANNELS[header!.channels]()];
    if (header!.indexed !== null) words.push(t('palette of {count}', { count: header!.indexed.palette.length / 4 }));
    if (treatment === null) return words.join(', ');
    words.push(treatment.content);
    if (header!.channels % 2 === 0 && treatment.alpha.use === 'mask') {
      words.push(t('mask at {cutoff}', { cutoff: treatment.alpha.cutoff }));
    }
    return words.join(', ');
  }

  #treatment(model: Model) {
    const { settings } = model;
    if (settings === null) return nothing;
    const globs = settings.matching?.globs.join(', ');
    const text =
      settings.file === null ? t('no settings file') : (globs ?? t('defaults of {file}', { file: settings.file }));
    if (model.open!.abilities.settings === null) {
      return html`<span><span class="quiet">${t('treatment')}</span> ${text}</span>`;
    }
    return html`<span><span class="quiet">${t('treatment')}</span> <button
      class="link"
      title=${t('Show the settings that apply')}
      @click=${() => this.#do(model, 'showSettings', { key: null })}
    >
      ${text}
    </button></span>`;
  }

  #build(model: Model) {
    const able = model.open!.abilities.build;
    if (able === null) return nothing;
    return html`<button
      class="main"
      ?disabled=${able !== true || this.busy !== null}
      title=${able === true ? t('Writes every level and target of this texture') : able}
      @click=${() => this.#do(model, 'build', null)}
    >
      ${this.busy === 'build' ? t('Building …') : t('Build')}
    </button>`;
  }

  /** What is known of the texture elsewhere: its outputs, its settings, its report. */
  #about(model: Model) {
    const { reveal, settings } = model.open!.abilities;
    if (settings === null) return nothing;
    const idle = this.busy === null;
    return html`
      <button
        class="plain"
        ?disabled=${!idle || reveal !== true || model.built.kind === 'not-built'}
        title=${typeof reveal === 'string' ? reveal : t('Show what was built of this texture in the explorer')}
        @click=${() => this.#do(model, 'reveal', null)}
      >
        ${t('Reveal outputs')}
      </button>
      <button
        class="plain"
        ?disabled=${!idle}
        title=${t('Show the settings that apply to this texture')}
        @click=${() => this.#do(model, 'showSettings', { key: null })}
      >
        ${t('Open settings')}
      </button>
      <button
        class="plain"
        ?disabled=${!idle}
        title=${t('Its treatment, and what the build measured, as text')}
        @click=${() => this.#do(model, 'report', null)}
      >
        ${t('Copy report')}
      </button>
    `;
  }

  #export(model: Model) {
    if (model.open!.abilities.export === null) return nothing;
    const button = (form: ExportOrder['form'], text: string, title: string) => html`<button
      ?disabled=${this.busy !== null || model.header === null || model.treatment === null}
      title=${title}
      @click=${() => this.#exportAs(model, form)}
    >
      ${text}
    </button>`;
    if (model.open!.abilities.export === 'page') {
      return button('page', t('Save a copy'), t('This page as one file, with what it shows now'));
    }
    return html`
      ${button('sheet', t('Export sheet'), t('One picture: every target at its true size, and the kernels compared'))}
      ${button('page', t('Export page'), t('One HTML file that shows this proof without an editor and without a network'))}
    `;
  }

  #adopt(model: Model) {
    const settings = adoptable(model.slot);
    const able = model.open!.abilities.adopt;
    if (able === null) return nothing;
    if (model.slot.id === 0 || Object.keys(settings).length === 0) return nothing;
    const why = able === true ? '' : able;
    const { matching } = model.settings!;
    const change = (scope: AdoptChange['scope']) => this.#do(model, 'adopt', { scope, settings });
    return html`
      <button ?disabled=${able !== true || this.busy !== null} title=${why} @click=${() => change('file')}>
        ${t('Adopt for this file only')}
      </button>
      ${
        matching === null
          ? nothing
          : html`<button ?disabled=${able !== true || this.busy !== null} title=${why} @click=${() => change('matching')}>
              ${
                matching.textures === 1
                  ? t('Adopt for {globs}, 1 file', { globs: matching.globs.join(', ') })
                  : t('Adopt for {globs}, {count} files', {
                      globs: matching.globs.join(', '),
                      count: matching.textures,
                    })
              }
            </button>`
      }
    `;
  }

  async #exportAs(model: Model, form: ExportOrder['form']): Promise<void> {
    this.busy = 'export';
    await exportProof(model, form);
    this.busy = null;
  }

  async #do<K extends 'build' | 'adopt' | 'showSettings' | 'reveal' | 'report'>(
    model: Model,
    call: K,
    question: Question<K>,
  ): Promise<void> {
    this.busy = call;
    const { reply } = await model.link.ask(call, question);
    this.busy = null;
    if ('problem' in reply) model.say({ text: say(reply.problem), kind: 'failed' });
    else if (call === 'report') model.say({ text: t('The report is on the clipboard.'), kind: 'said' });
    else if (call === 'showSettings' || call === 'reveal') model.say(null);
    else model.say({ text: doneWords(reply.ok as object), kind: 'said' });
  }
}

customElements.define('top-bar', TopBar);

const CHANNELS = {
  1: () => t('gray'),
  2: () => t('gray and alpha'),
  3: () => 'RGB',
  4: () => 'RGBA',
} as const;

function builtWords({ built }: Model): string {
  switch (built.kind) {
    case 'not-built':
      return t('not built yet');
    case 'built':
      return t('built, up to date');
    case 'stale':
      return t('stale: {moved} changed since the build', { moved: built.moved.join(', ') });
    case 'unknown':
      return '';
  }
}

function doneWords(done: object): string {
  if ('path' in done) return t('Put into {path}, not saved yet.', { path: String(done.path) });
  if (!('failed' in done)) return '';
  const { built, unchanged, failed } = done as { built: number; unchanged: number; failed: number };
  if (failed > 0) return t('The build failed.');
  return built > 0 ? t('Built.') : unchanged > 0 ? t('Nothing had changed.') : t('Nothing to build.');
}
