import { choice, integer, Misfit, nothing, object, type Shape } from '../../../core/manifest/shape.ts';
import type { QuestionOf, RequestOf } from '../../../core/protocol.ts';
import type { ReviewCalls } from '../../../core/review/want.ts';
import { readQuestion } from '../proof/question.ts';

/** Reads a message of a review's page, and trusts nothing in it. Throws Refusal, as a proof's. */
export function readReviewRequest(message: unknown): RequestOf<ReviewCalls> {
  return readQuestion<ReviewCalls>(message, shapes);
}

const shapes: { readonly [K in keyof ReviewCalls]: Shape<QuestionOf<ReviewCalls, K>> } = {
  open: nothing,
  sides: nothing,
  go: object<{ index: number }>({ index: integer(0, 1_000_000) }),
  look: object<{ looked: 'yes' | 'no' }>({ looked: choice('yes', 'no') }),
  proof: nothing,
  copy: object<{ text: string }>({ text: shortText }),
};

/** What a page may put on the clipboard: 1 Mi characters. */
const COPY_LIMIT = 2 ** 20;

function shortText(value: unknown, at: string): string {
  if (typeof value !== 'string' || value.length > COPY_LIMIT) throw new Misfit(at, `up to ${COPY_LIMIT} characters`);
  return value;
}
