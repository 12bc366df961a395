import { html, nothing } from 'lit';
import { passingCode } from '../../../core/chain/coverage.ts';
import { light, percent } from '../../../core/figures.ts';
import { defaultParams, findKernel, kernels } from '../../../core/kernel/table.ts';
import { say } from '../../../core/problem.ts';
import type { Slot } from '../../../core/proof/slot.ts';
import type { Picture, Print } from '../../../core/proof/want.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { isProblem } from '../state/bench-link.ts';
import { cursorTexel, lineOf } from '../state/line.ts';
import type { Model } from '../state/model.ts';
import { pinsHere, togglePin } from '../state/pin.ts';
import { type Against, type State, slotAgainst } from '../state/state.ts';
import { changeWords } from '../treatment/change-words.ts';
import { unfitFor } from '../treatment/fit.ts';
import { t } from '../words/t.ts';
import { artFigures } from './art-figures.ts';
import { besideFigure } from './beside-figure.ts';
import { afterGesture } from './gesture.ts';
import { slotPicture } from './slot-picture.ts';
import './print-card.ts';
import type { CardAction, CardFacts, CardFigure } from './print-card.ts';
import type { Scene, StageGesture } from './print-stage.ts';
import { WholeRow } from './whole-row.ts';

/** The row of prints: the settings' own first, then what is tried beside it, all at one place and one zoom. */
export class PrintRow extends WholeRow<Model> {
  /** What each print last showed: it stands in, stretched, until the next is made. */
  readonly #shown = new Map<number, Picture>();

  override render() {
    const { model } = this;
    if (model === null || model.seen === null || model.treatment === null) return nothing;
    return this.row(
      model.state.slots.map((slot) => {
        const facts = this.#facts(model, slot);
        return html`<print-card
          role="listitem"
          aria-label=${facts.scene.label}
          ?chosen=${facts.selected && model.state.slots.length > 1}
          .facts=${facts}
          @card=${(event: CustomEvent<CardAction>) => this.#act(model, slot, event.detail)}
          @gesture=${(event: CustomEvent<StageGesture>) => this.#gesture(model, event.detail)}
          @focusin=${() => model.state.selected !== slot.id && model.set({ selected: slot.id })}
          @pointerdown=${() => model.state.selected !== slot.id && model.set({ selected: slot.id })}
        ></print-card>`;
      }),
    );
  }

  #facts(model: Model, slot: Slot): CardFacts {
    const seen = model.seen!;
    const treatment = model.treatmentOf(slot)!;
    const told = model.print(treatment, seen.image);
    const print = told === undefined || isProblem(told) ? null : told;
    if (print !== null) this.#shown.set(slot.id, print.picture);
    const pixels = print === null ? '' : model.pixels(treatment, seen.image);
    const shrinks = seen.lod > 0 || (seen.lod === 0 && 'level' in seen.image);
    const kernel = shrinks ? treatment.kernel.minify : treatment.kernel.magnify;
    const unfit = slot.kernel === null ? null : unfitFor(slot.kernel, seen.stop, model.base!);
    const problem = isProblem(told) ? say(told.problem) : unfit === null ? null : unfitWords(slot.kernel!.name, unfit);
    return {
      slot,
      kernel: slot.kernel ?? kernel,
      selected: slot.id === model.state.selected,
      scene: this.#scene(model, slot, treatment, unfit === null ? print : null, problem !== null),
      figures: print === null ? [] : figuresOf(model, treatment, print),
      status: problem ?? (print === null ? t('Computing …') : null),
      failed: problem !== null,
      changes: changeWords(slot.change),
      built: slot.id === 0 && print !== null ? builtWords(model, pixels) : null,
      pixels,
      tall: treatment.alpha.use === 'mask' && model.header!.channels % 2 === 0,
    };
  }

  #scene(model: Model, slot: Slot, treatment: Treatment, print: Print | null, failed: boolean): Scene {
    const { state } = model;
    const seen = model.seen!;
    const picture = failed ? null : (print?.picture ?? this.#shown.get(slot.id) ?? model.takeover.standIn(treatment));
    const depth = picture?.depth ?? 8;
    return {
      extent: seen.extent,
      picture,
      reference: pictureAgainst(model, state.against),
      partner: pictureAgainst(model, state.partner),
      compare: state.compare === 'divider' ? 'divider' : this.swapped ? 'partner' : 'beside',
      divider: state.divider,
      view: {
        show: model.show,
        metric: state.metric,
        blend: treatment.view.blend,
        passing: passingCode(treatment.alpha, depth),
        normalY: treatment.normal.y,
        lamp: state.lamp,
      },
      backdrop: state.backdrop,
      magnify: state.magnify,
      wrap: treatment.wrap,
      tiles: state.tiles,
      zoom: state.zoom,
      pan: state.pan,
      marks: model.show === 'overshoot' && print !== null ? model.marks(treatment, seen.image) : null,
      art: model.show === 'art' && print !== null ? model.told({ kind: 'art', treatment, image: seen.image }) : null,
      cursor: picture === null || !this.pointing ? null : cursorTexel(state.cursor, seen.extent),
      pins: pinsHere(model).map(({ x, y, number }) => ({ x, y, number })),
      line: state.line === 'drawn' ? lineOf(state, seen.extent) : null,
      draws: state.line === 'drawn',
      label: t('Print by {kernel}, {width} by {height} texels. Arrow keys move the cursor, P pins its texel.', {
        kernel: slot.kernel?.name ?? treatment.kernel.minify.name,
        ...seen.extent,
      }),
    };
  }

  #gesture(model: Model, gesture: StageGesture): void {
    if (gesture.kind === 'pin') togglePin(model, { u: gesture.u, v: gesture.v });
    else model.set(gesture.kind === 'draw' ? { drawn: gesture.line } : (afterGesture(gesture) ?? {}));
  }

  #act(model: Model, slot: Slot, action: CardAction): void {
    if (action.kind === 'remove') this.#shown.delete(slot.id);
    model.set(afterAction(model.state, slot, action));
  }
}

customElements.define('print-row', PrintRow);

/** Adds a print by a kernel, and selects it. */
export function addPrint(model: Model, name: string): void {
  const kernel = findKernel(name) ?? kernels[0];
  const id = Math.max(...model.state.slots.map((slot) => slot.id)) + 1;
  const slot: Slot = { id, kernel: { name: kernel.name, params: defaultParams(kernel) }, change: {} };
  model.set({ slots: [...model.state.slots, slot], selected: id });
}

/** What prints are compared with, at the sight; null while it is not made. */
function pictureAgainst(model: Model, against: Against): Picture | null {
  const { image } = model.seen!;
  const slot = slotAgainst(against, model.state.slots);
  return slot === null ? (model.sourcePrint(image)?.print?.picture ?? null) : slotPicture(model, slot, image);
}

function afterAction({ slots }: State, slot: Slot, action: CardAction): Partial<State> {
  switch (action.kind) {
    case 'select':
      return { selected: slot.id };
    case 'remove':
      return { slots: slots.filter(({ id }) => id !== slot.id), selected: 0 };
    case 'kernel': {
      const changed = { ...slot, kernel: action.kernel };
      return { slots: slots.map((each) => (each.id === slot.id ? changed : each)), selected: slot.id };
    }
  }
}

function figuresOf(model: Model, treatment: Treatment, print: Print): readonly CardFigure[] {
  if (model.outputAt(model.seen!.image) !== 'image') return [besideFigure(print.picture)];
  const { coverage, luminance, normalLength, coverageScale } = print.stats;
  const base = model.levels()?.levels[0]?.stats;
  const { image } = model.seen!;
  const halo = model.halo(treatment, image)?.halo;
  const limits = treatment.limits;
  const figures: CardFigure[] = [];
  const add = (name: string, text: string, over = false): void => void figures.push({ name, text, over });
  // Normals are made unit whatever their kernel did.
  if (halo && normalLength === null) {
    add(t('halo'), halo.worst.toFixed(1), limits.halo !== null && halo.worst > limits.halo);
    if (halo.clipped > 0) add(t('clipped'), percent(halo.clipped));
  }
  for (const each of artFigures(model.told({ kind: 'art', treatment, image }))) figures.push(each);
  if (coverage !== null) {
    const loss = base?.coverage ? 1 - coverage / base.coverage : 0;
    add(t('coverage'), percent(coverage), limits.thinning !== null && loss > limits.thinning);
    if (coverageScale !== null && coverageScale !== 1) add(t('alpha scaled by'), coverageScale.toFixed(2));
  }
  if (luminance !== null) {
    const change = base?.luminance ? luminance / base.luminance - 1 : 0;
    const signed = Math.abs(change) < 0.0005 ? '' : ` ${change > 0 ? '+' : '−'}${percent(Math.abs(change))}`;
    add(t('luminance'), light(luminance) + signed);
  }
  if (normalLength !== null) add(t('normal length'), light(normalLength));
  return figures;
}

function builtWords(model: Model, pixels: string): string | null {
  const equal = model.equalsBuild(model.seen!.image, pixels);
  return equal === null ? null : equal ? t('equals the build') : t('differs from the build');
}

function unfitWords(kernel: string, action: 'minify' | 'magnify'): string {
  return action === 'minify'
    ? t('{kernel} only magnifies. Choose a target larger than the source.', { kernel })
    : t('{kernel} only minifies. Choose a level or a smaller target.', { kernel });
}
