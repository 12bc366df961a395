import { css, html, LitElement, nothing } from 'lit';
import { controls } from '../form/controls.ts';
import { cardStyles } from '../prints/print-card.styles.ts';
import '../prints/print-stage.ts';
import type { Scene } from '../prints/print-stage.ts';

export interface SideFacts {
  readonly name: string;
  /** What this version is of: a commit, the working tree. */
  readonly label: string;
  /** Null where there is no such version; `words` then says why. */
  readonly scene: Scene | null;
  readonly words: string;
  readonly failed: 'yes' | 'no';
  readonly figures: readonly { readonly name: string; readonly text: string; readonly over: boolean }[];
}

/** One print of a review with its name above and its numbers below. */
export class SideCard extends LitElement {
  static override properties = { facts: { attribute: false } };
  declare facts: SideFacts | null;

  static override styles = [
    controls,
    cardStyles,
    css`
      header b {
        font-weight: 600;
      }
      header .quiet {
        overflow: hidden;
        text-overflow: ellipsis;
        white-space: nowrap;
        min-width: 0;
      }
      .words {
        display: grid;
        place-content: center;
        padding: 16px;
        margin: 0;
        text-align: center;
        color: var(--proof-quiet);
        min-height: 120px;
      }
      .words.failed {
        color: var(--proof-error);
      }
    `,
  ];

  constructor() {
    super();
    this.facts = null;
  }

  override render() {
    const { facts } = this;
    if (facts === null) return nothing;
    const { scene, figures } = facts;
    return html`
      <header><b>${facts.name}</b> <span class="quiet">${facts.label}</span></header>
      ${
        scene === null
          ? html`<p class="words ${facts.failed === 'yes' ? 'failed' : ''}" role=${facts.failed === 'yes' ? 'alert' : nothing}>
              ${facts.words}
            </p>`
          : html`<print-stage .scene=${scene}></print-stage>`
      }
      <footer>
        ${scene === null || facts.words === '' ? nothing : html`<span class="quiet">${facts.words}</span>`}
        ${figures.map(
          ({ name, text, over }) => html`<span class="figure">
            <span class="quiet">${name}</span> <b class="number ${over ? 'over' : ''}">${text}</b>
          </span>`,
        )}
      </footer>
    `;
  }
}

customElements.define('side-card', SideCard);
