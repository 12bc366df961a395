import type { Hash } from '../port.ts';
import type { Problem } from '../problem.ts';
import type { PairSide, ReviewPreferences, ReviewRow } from '../review/want.ts';
import type { Treatment } from '../treatment/treatment.ts';
import { type CarriedBlock, documentOf, type PageCode } from './document.ts';

/** Id of what a review's page carries beside the files. */
export const REVIEW_BLOCK = 'review';

/** Id of the block with the bytes of a texture's side. */
export function sideBlock(index: number, side: 'before' | 'after'): string {
  return `${side}-${index}`;
}

/** Raised when what a page carries changes its shape; code and data are always of one export. */
const FORMAT = 1;

/** A review that is to be exported. */
export interface ReviewOrder {
  /** How people call the two ends. */
  readonly beforeLabel: string;
  readonly afterLabel: string;
  /** Most harmful first. */
  readonly textures: readonly ReviewTexture[];
  readonly preferences: ReviewPreferences;
}

export interface ReviewTexture extends ReviewRow {
  readonly oldPath: string;
  readonly manifest: 'none' | 'fresh' | 'stale';
  readonly problems: readonly Problem[];
  readonly before: PairSide;
  readonly after: PairSide;
}

/** One side without its bytes, which lie in a block of their own. */
export type CarriedSide =
  | { readonly kind: 'file'; readonly path: string; readonly treatment: Treatment }
  | { readonly kind: 'none' }
  | { readonly kind: 'problem'; readonly problem: Problem };

/** What is told in the block `REVIEW_BLOCK`. */
export interface CarriedReview {
  readonly format: typeof FORMAT;
  readonly beforeLabel: string;
  readonly afterLabel: string;
  readonly textures: readonly (Omit<ReviewTexture, 'before' | 'after'> & {
    readonly before: CarriedSide;
    readonly after: CarriedSide;
  })[];
  readonly preferences: ReviewPreferences;
  /** Translations of the page's words, by English text. */
  readonly words: Readonly<Record<string, string>>;
  readonly remark: string | null;
}

/** Bytes of files that a review's page carries: 50 MB, so that it can still be sent about. */
export const REVIEW_BYTES = 50_000_000;

/** The review as one HTML file that compares the files that it carries, as an editor's panel does. Files are carried from the most
 *  harmful texture on while they fit in `REVIEW_BYTES`; of the rest the list says what was found, and the page that they were left
 *  out. Equal orders, words and code give equal texts. */
export function reviewPage(
  order: ReviewOrder,
  page: {
    readonly title: string;
    readonly code: PageCode;
    readonly language: string;
    readonly words: Readonly<Record<string, string>>;
    readonly limitBytes?: number;
  },
  newHash: () => Hash,
): string {
  const limit = page.limitBytes ?? REVIEW_BYTES;
  const blocks: CarriedBlock[] = [];
  let bytes = 0;
  const textures = order.textures.map(({ before, after, ...texture }, index) => {
    const size = sizeOf(before) + sizeOf(after);
    const fits = bytes + size <= limit;
    if (fits) bytes += size;
    const carry = (side: PairSide, which: 'before' | 'after'): CarriedSide => {
      if (side.kind !== 'file') return side;
      if (!fits) {
        return {
          kind: 'problem',
          problem: { code: 'side-too-large', severity: 'error', values: { bytes: side.bytes.byteLength, limit } },
        };
      }
      blocks.push({ id: sideBlock(index, which), bytes: new Uint8Array(side.bytes) });
      return { kind: 'file', path: side.path, treatment: side.treatment };
    };
    return { ...texture, before: carry(before, 'before'), after: carry(after, 'after') };
  });
  const left = textures.filter(({ before, after }) => [before, after].some(isLeftOut)).length;
  const carried: CarriedReview = {
    format: FORMAT,
    beforeLabel: order.beforeLabel,
    afterLabel: order.afterLabel,
    textures,
    preferences: order.preferences,
    words: page.words,
    remark:
      left === 0 ? null : `The files of ${left} textures were left out: together they are too large for one page.`,
  };
  return documentOf(
    {
      title: page.title,
      language: page.language,
      code: page.code,
      blocks: [{ id: REVIEW_BLOCK, json: carried }, ...blocks],
    },
    newHash,
  );
}

function isLeftOut(side: CarriedSide): boolean {
  return side.kind === 'problem' && side.problem.code === 'side-too-large';
}

function sizeOf(side: PairSide): number {
  return side.kind === 'file' ? side.bytes.byteLength : 0;
}
