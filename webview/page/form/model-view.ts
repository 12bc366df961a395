import { LitElement, type PropertyDeclarations } from 'lit';

/** A part of a page: it shows what a model holds, and is drawn anew when a tick says that the model moved. */
export abstract class ModelView<Model> extends LitElement {
  static override properties: PropertyDeclarations = { model: { attribute: false }, tick: { type: Number } };
  declare model: Model | null;
  declare tick: number;

  constructor() {
    super();
    this.model = null;
    this.tick = 0;
  }
}
