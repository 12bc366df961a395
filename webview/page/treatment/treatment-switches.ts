import { css, html, nothing } from 'lit';
import type { Wrap } from '../../../core/kernel/wrap.ts';
import type { Change } from '../../../core/proof/slot.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import type { Model } from '../state/model.ts';
import { t } from '../words/t.ts';
import { tidied } from './change.ts';

/** What the selected print does with light, alpha and edges. Turning a switch on the settings' own print begins a new one beside
 *  it, so that the two can be compared. */
export class TreatmentSwitches extends ModelView<Model> {
  static override styles = [
    controls,
    css`
      :host {
        display: flex;
        flex-wrap: wrap;
        align-items: center;
        gap: 4px 14px;
        padding: 4px 10px;
        border-bottom: 1px solid var(--proof-line);
      }
      .changed > span:first-of-type::before {
        content: '● ';
        color: var(--proof-accent);
        font-size: 0.8em;
      }
    `,
  ];

  override render() {
    const { model } = this;
    if (model === null || model.seen === null || model.treatment === null) return nothing;
    const { slot } = model;
    const now = model.treatmentOf(slot)!;
    const hasAlpha = model.header!.channels % 2 === 0 && (now.alpha.use === 'opacity' || now.alpha.use === 'mask');
    const normal = now.content === 'normal' || Object.values(now.channels ?? {}).includes('normal');
    return html`
      <span class="heading">${t('What if')}</span>
      ${
        now.content === 'color'
          ? this.#list('light', t('Weigh'), now.light, [
              ['linear', t('linear light')],
              ['code', t('codes as they are')],
            ])
          : nothing
      }
      ${hasAlpha ? this.#check('weight', t('Weigh color by alpha'), now.alpha.weight) : nothing}
      ${this.#list('wrap', t('Beyond the edges'), wrapOf(now), WRAPS)}
      ${
        hasAlpha && now.alpha.use === 'mask'
          ? this.#check('keepCoverage', t('Keep coverage'), now.alpha.keepCoverage)
          : nothing
      }
      ${
        hasAlpha
          ? this.#list('fill', t('Fill under alpha 0'), now.fill, [
              ['none', t('none')],
              ['hidden', t('below level 0')],
              ['all', t('everywhere')],
            ])
          : nothing
      }
      ${normal ? this.#check('renormalise', t('Renormalize level 0'), now.normal.base === 'renormalise') : nothing}
      ${
        Object.keys(slot.change).length > 0
          ? html`<button class="plain" @click=${() => this.#put({})}>${t('As the settings say')}</button>`
          : nothing
      }
    `;
  }

  #list<K extends keyof Change>(key: K, name: string, value: string, choices: readonly (readonly [string, string])[]) {
    const changed = this.model!.slot.change[key] !== undefined;
    return html`<label class=${changed ? 'changed' : ''}>
      <span class="quiet">${name}</span>
      <select
        .value=${value}
        @change=${(event: Event) => this.#turn({ [key]: (event.target as HTMLSelectElement).value })}
      >
        ${choices.map(([each, text]) => html`<option value=${each} ?selected=${each === value}>${text}</option>`)}
      </select>
    </label>`;
  }

  #check(key: keyof Change, name: string, value: boolean) {
    const changed = this.model!.slot.change[key] !== undefined;
    return html`<label class=${changed ? 'changed' : ''}>
      <input
        type="checkbox"
        .checked=${value}
        @change=${(event: Event) => this.#turn({ [key]: (event.target as HTMLInputElement).checked })}
      />
      <span>${name}</span>
    </label>`;
  }

  #turn(change: Change): void {
    const { slot, treatment } = this.model!;
    this.#put(tidied({ ...slot.change, ...change }, treatment!));
  }

  #put(change: Change): void {
    const model = this.model!;
    const { slots } = model.state;
    const { slot } = model;
    if (slot.id === 0) {
      if (Object.keys(change).length === 0) {
        this.requestUpdate();
        return;
      }
      const id = Math.max(...slots.map((each) => each.id)) + 1;
      model.set({ slots: [slots[0], { id, kernel: null, change }, ...slots.slice(1)], selected: id });
      return;
    }
    model.set({ slots: slots.map((each) => (each.id === slot.id ? { ...each, change } : each)) });
  }
}

customElements.define('treatment-switches', TreatmentSwitches);

const WRAPS: readonly (readonly [Wrap | '', string])[] = [
  ['clamp-to-edge', 'clamp-to-edge'],
  ['repeat', 'repeat'],
  ['mirror-repeat', 'mirror-repeat'],
  ['clamp-to-border', 'clamp-to-border'],
];

function wrapOf({ wrap }: Treatment): string {
  return wrap.x === wrap.y ? wrap.x : '';
}
