import { html, type PropertyDeclarations, type TemplateResult } from 'lit';
import { controls } from '../form/controls.ts';
import { ModelView } from '../form/model-view.ts';
import { t } from '../words/t.ts';
import { rowStyles } from './print-row.styles.ts';

/** What the rows of prints of a proof and of a review share: what they show, and whether the hand is on a print. */
export abstract class WholeRow<Model> extends ModelView<Model> {
  static override properties: PropertyDeclarations = {
    swapped: { type: Boolean },
    pointing: { state: true },
  };
  /** Whether what prints are compared with is shown in their place, while a key is held. */
  declare swapped: boolean;
  /** Whether the hand is on a print: only then is the cursor drawn, and the art is left alone otherwise. */
  declare pointing: boolean;

  static override styles = [controls, rowStyles];

  constructor() {
    super();
    this.swapped = false;
    this.pointing = false;
  }

  protected row(cards: readonly TemplateResult[]): TemplateResult {
    return html`<div
      class="row"
      role="list"
      aria-label=${t('Prints')}
      @pointerenter=${this.#on}
      @pointerleave=${this.#off}
      @focusin=${this.#on}
      @focusout=${this.#off}
    >
      ${cards}
    </div>`;
  }

  readonly #on = (): void => {
    this.pointing = true;
  };

  readonly #off = (): void => {
    this.pointing = false;
  };
}
