import type { Problem } from '../problem.ts';
import type { Picture } from '../proof/want.ts';
import type { Treatment } from '../treatment/treatment.ts';
import type { Difference } from './difference.ts';
import type { Impact } from './impact.ts';
import type { Review } from './review.ts';
import type { SizeFigures, SizeReview } from './sizes.ts';
import type { Verdict } from './verdict.ts';

// What a page asks of a pair of versions, and what it is told: plain data, so it can be posted to a worker. A bench answers
// (bench.ts), with the same chains and the same comparison as the command line.

/** One version as a page is given it: the file's bytes and what its settings say, or nothing, or why it cannot be had. */
export type PairSide =
  | { readonly kind: 'file'; readonly path: string; readonly bytes: ArrayBuffer; readonly treatment: Treatment }
  /** Added or removed: there is no such version. */
  | { readonly kind: 'none' }
  | { readonly kind: 'problem'; readonly problem: Problem };

export type ReviewWant =
  /** Verdict, sizes, impact: what the list says, made of these very bytes. */
  | { readonly kind: 'review' }
  /** Both pictures at one size, of one extent, and where they differ. */
  | { readonly kind: 'pair'; readonly image: SizeReview['image'] };

export type ReviewWantKind = ReviewWant['kind'];

export interface ReviewAnswers {
  readonly review: { readonly kind: 'review'; readonly review: Review };
  readonly pair: PairAnswer;
}

export type ReviewAnswer = ReviewAnswers[ReviewWantKind];

export interface PairAnswer {
  readonly kind: 'pair';
  readonly image: SizeReview['image'];
  /** Null where a side has nothing at this size. A side of another extent is magnified or minified as a sampler does. */
  readonly before: PairPicture | null;
  readonly after: PairPicture | null;
  readonly difference: Difference | null;
  /** A byte a texel, row by row: 0 where equal, `HIDDEN_MARK` where only what nobody sees differs, else 1..254 by distance, `MARK_SCALE` a
   *  unit. Null where a side is missing. */
  readonly marks: Uint8Array | null;
}

export interface PairPicture {
  readonly picture: Picture;
  readonly figures: SizeFigures;
}

/** Differs under alpha 0 alone. */
export const HIDDEN_MARK = 255;

/** Marks of one unit of distance: what is just seen, 0.02, is 5; distances above 1 stay at 254. */
export const MARK_SCALE = 250;

/** To the worker. Wants replace the ones before them: newest wins. */
export type ToReviewBench =
  | { readonly kind: 'open'; readonly revision: number; readonly before: PairSide; readonly after: PairSide }
  | {
      readonly kind: 'want';
      readonly revision: number;
      readonly wants: readonly { readonly key: string; readonly want: ReviewWant }[];
    };

/** From the worker. */
export type FromReviewBench =
  | { readonly kind: 'answer'; readonly revision: number; readonly key: string; readonly answer: ReviewAnswer }
  | { readonly kind: 'problem'; readonly revision: number; readonly key: string | null; readonly problem: Problem };

/** What a panel asks of its host, as the proof's page asks by `HostCalls` of protocol.ts. */
export interface ReviewCalls {
  /** Handshake; asked again after a reload. */
  open(): ReviewOpenReply;
  /** Both versions of the texture at hand. */
  sides(): { readonly before: PairSide; readonly after: PairSide };
  /** Another texture of the list becomes the one at hand; the host answers with an event. */
  go(place: { readonly index: number }): Record<string, never>;
  /** Sets or takes away the mark that this change was looked at. */
  look(mark: { readonly looked: 'yes' | 'no' }): Record<string, never>;
  /** Opens the proof of the file as it is now. */
  proof(): Record<string, never>;
  /** Puts text on the clipboard. */
  copy(text: { readonly text: string }): Record<string, never>;
}

export interface ReviewOpenReply {
  /** Equal for the same texture with the same two contents. */
  readonly key: string;
  /** From the top of the repository; the former path where it was renamed. */
  readonly path: string;
  readonly oldPath: string;
  readonly status: string;
  /** How people call the two ends. */
  readonly beforeLabel: string;
  readonly afterLabel: string;
  /** Place in the list, from 0, and how many there are and were looked at. */
  readonly index: number;
  readonly count: number;
  readonly lookedAt: number;
  readonly looked: 'yes' | 'no';
  /** Null where there is no host that could do it, or no file. */
  readonly abilities: { readonly look: true | null; readonly proof: true | null };
  /** The whole list, most harmful first, where nothing else shows it: in an exported page. */
  readonly rows: readonly ReviewRow[] | null;
  readonly preferences: ReviewPreferences;
  /** Translations of the page's own words, by English text; empty in English. */
  readonly words: Readonly<Record<string, string>>;
  /** What was left out of an exported page; null where nothing was. */
  readonly remark: string | null;
  readonly manifest: 'none' | 'fresh' | 'stale';
  /** Of the settings, and limits that are passed. */
  readonly problems: readonly Problem[];
}

/** A texture of the list, as far as it is known. */
export interface ReviewRow {
  readonly path: string;
  readonly status: string;
  readonly verdict: Verdict;
  readonly impact: Impact;
}

/** Settings of the door that a review's page follows. */
export interface ReviewPreferences {
  readonly backdrop: 'checker' | 'black' | 'white' | 'gray';
  /** Least milliseconds between two swaps, 333 or more. */
  readonly swapDwell: number;
}
