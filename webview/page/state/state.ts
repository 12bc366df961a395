import { type Sight, type Slot, STATE_VERSION } from '../../../core/proof/slot.ts';
import type { Preferences } from '../../../core/protocol.ts';
import type { Target } from '../../../core/treatment/treatment.ts';
import type { Output } from './output.ts';
import type { Pin } from './pin.ts';

export type Show = 'color' | 'r' | 'g' | 'b' | 'a' | 'bare' | 'mask' | 'lit' | 'difference' | 'overshoot' | 'art';

/** What prints are compared with: the area mean of the source, the settings' own print, or another print by its id. */
export type Against = 'source' | 'settings' | `print-${number}`;

/** The print that is compared with, the settings' own where it is none or was taken off; null for the source. */
export function slotAgainst(against: Against, slots: readonly Slot[]): Slot | null {
  return against === 'source' ? null : (slots.find(({ id }) => against === `print-${id}`) ?? slots[0]);
}

export type Backdrop = Preferences['backdrop'];

/** What is kept across hiding and reloading. */
export interface State {
  readonly sight: Sight | null;
  readonly typed: readonly Target[];
  readonly slots: readonly Slot[];
  readonly selected: number;
  /** What of the build's outputs is shown, where there is more than the image. */
  readonly output: Output;
  readonly show: Show;
  readonly metric: 'oklab' | 'r' | 'g' | 'b' | 'a';
  readonly against: Against;
  readonly backdrop: Backdrop;
  readonly magnify: 'nearest' | 'bilinear';
  readonly tiles: boolean;
  readonly compare: 'beside' | 'divider' | 'swap';
  /** What the divider and the swap show. */
  readonly partner: Against;
  /** Share of a print's width, 0..1. */
  readonly divider: number;
  /** Device pixels a texel; null fits the print into its frame. */
  readonly zoom: number | null;
  /** The texel in the middle of the frame, in shares of width and height. */
  readonly pan: { readonly x: number; readonly y: number };
  /** Light on normals: toward the viewer from -1..1 across and up. */
  readonly lamp: { readonly x: number; readonly y: number };
  /** The point that is read, in shares of width and height. */
  readonly cursor: { readonly u: number; readonly v: number };
  readonly pins: readonly Pin[];
  readonly line: 'row' | 'column' | 'drawn';
  /** Ends of a drawn line, in shares. */
  readonly drawn: { readonly from: readonly [number, number]; readonly to: readonly [number, number] };
  /** Typed outlook; null is what settings and preferences say. */
  readonly texelsPerMeter: number | null;
  readonly fovY: number | null;
  readonly screenHeight: number | null;
}

export const startState: State = {
  sight: null,
  typed: [],
  slots: [{ id: 0, kernel: null, change: {} }],
  selected: 0,
  output: 'image',
  show: 'color',
  metric: 'oklab',
  against: 'source',
  backdrop: 'checker',
  magnify: 'nearest',
  tiles: false,
  compare: 'beside',
  partner: 'source',
  divider: 0.5,
  zoom: null,
  pan: { x: 0.5, y: 0.5 },
  lamp: { x: -0.5, y: 0.6 },
  cursor: { u: 0.5, v: 0.5 },
  pins: [],
  line: 'row',
  drawn: { from: [0.25, 0.25], to: [0.75, 0.75] },
  texelsPerMeter: null,
  fovY: null,
  screenHeight: null,
};

/** What was kept, as far as this page understands it; the rest is as at the start. */
export function readState(kept: unknown): State {
  if (typeof kept !== 'object' || kept === null || (kept as { version?: unknown }).version !== STATE_VERSION)
    return startState;
  const { version: _, ...state } = kept as { version: number } & State;
  const slots = Array.isArray(state.slots) && state.slots[0]?.kernel === null ? state.slots : startState.slots;
  return { ...startState, ...state, slots };
}

export function writeState(state: State): Readonly<Record<string, unknown>> {
  return { version: STATE_VERSION, ...state };
}
