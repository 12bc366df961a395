import type { ReviewPreferences } from '../../../core/review/want.ts';
import type { Show } from '../state/state.ts';

/** The size that is looked at. */
export type ReviewSight =
  | { readonly kind: 'level'; readonly level: number }
  | { readonly kind: 'target'; readonly name: string };

export type ReviewShow = Exclude<Show, 'difference' | 'overshoot'>;

/** What a review's page keeps across hiding and reloading. */
export interface ReviewState {
  /** The texture that `sight` is of; another one opens where its change hurts. */
  readonly key: string;
  /** Null is where the change hurts. */
  readonly sight: ReviewSight | null;
  /** Null is as it is compared: a mask after its test, everything else as it is. */
  readonly show: ReviewShow | null;
  readonly backdrop: ReviewPreferences['backdrop'];
  readonly magnify: 'nearest' | 'bilinear';
  readonly tiles: boolean;
  readonly compare: 'beside' | 'divider' | 'swap';
  /** Share of a print's width, 0..1. */
  readonly divider: number;
  /** Device pixels a texel; null fits the print into its frame. */
  readonly zoom: number | null;
  /** The texel in the middle of the frame, in shares of width and height. */
  readonly pan: { readonly x: number; readonly y: number };
  /** Light on normals, from -1..1 across and up. */
  readonly lamp: { readonly x: number; readonly y: number };
  /** The point that is read, in shares; null is where the difference is largest. */
  readonly cursor: { readonly u: number; readonly v: number } | null;
}

const startState: ReviewState = {
  key: '',
  sight: null,
  show: null,
  backdrop: 'checker',
  magnify: 'nearest',
  tiles: false,
  compare: 'beside',
  divider: 0.5,
  zoom: null,
  pan: { x: 0.5, y: 0.5 },
  lamp: { x: -0.5, y: 0.6 },
  cursor: null,
};

/** What was kept, as far as this page understands it; the rest is as at the start. */
export function readReviewState(kept: unknown): ReviewState {
  if (typeof kept !== 'object' || kept === null || (kept as { version?: unknown }).version !== VERSION)
    return startState;
  const { version: _, ...state } = kept as { version: number } & ReviewState;
  return { ...startState, ...state };
}

export function writeReviewState(state: ReviewState): Readonly<Record<string, unknown>> {
  return { version: VERSION, ...state };
}

/** The state of another texture: how it is looked at stays, where it is looked at does not. */
export function turnTo(state: ReviewState, key: string): ReviewState {
  if (state.key === key) return state;
  return { ...state, key, sight: null, cursor: null, zoom: null, pan: startState.pan };
}

/** Raised when a kept state changes its shape. */
const VERSION = 1;
