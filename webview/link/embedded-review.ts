import { type CarriedReview, type CarriedSide, REVIEW_BLOCK, sideBlock } from '../../core/export/review-page.ts';
import type { Problem } from '../../core/problem.ts';
import { PROTOCOL, type QuestionOf, type ReplyOf, type ReviewEvent } from '../../core/protocol.ts';
import type { PairSide, ReviewCalls, ReviewOpenReply } from '../../core/review/want.ts';
import { carriedBytes, carriedJson } from './carried.ts';
import type { Answered } from './link.ts';
import type { ReviewLink } from './review-link.ts';

/** A link to the review that an exported page carries, which answers as a host would. Null where the document carries none. */
export function openEmbeddedReview(source: Document): ReviewLink | null {
  const review = carriedJson(source, REVIEW_BLOCK) as CarriedReview | null;
  if (review === null) return null;
  const listeners: ((event: ReviewEvent) => void)[] = [];
  let index = 0;
  let revision = 0;
  let state: unknown = null;
  let closed = false;

  const answer = async (call: keyof ReviewCalls, question: unknown): Promise<unknown> => {
    switch (call) {
      case 'open':
        if (review.textures.length === 0) return { problem: { code: 'review-nothing', severity: 'error', values: {} } };
        return { ok: openReply(review, index) };
      case 'sides': {
        const { before, after } = review.textures[index];
        const [one, other] = [before, after].map((side, at) =>
          sideOf(source, side, index, at === 0 ? 'before' : 'after'),
        );
        return { ok: { before: await one, after: await other } };
      }
      case 'go': {
        const { index: next } = question as QuestionOf<ReviewCalls, 'go'>;
        if (review.textures[next] !== undefined) index = next;
        revision++;
        for (const listener of listeners) listener({ protocol: PROTOCOL, kind: 'texture', revision });
        return { ok: {} };
      }
      case 'copy':
        await navigator.clipboard.writeText((question as QuestionOf<ReviewCalls, 'copy'>).text);
        return { ok: {} };
      case 'look':
      case 'proof':
        return { problem: { code: 'exported-page', severity: 'error', values: {} } };
    }
  };

  return {
    async ask<K extends keyof ReviewCalls>(
      call: K,
      question: QuestionOf<ReviewCalls, K>,
    ): Promise<Answered<ReviewCalls, K>> {
      if (closed) return { revision, reply: { problem: unexpected('The page is closed') } };
      try {
        return { revision, reply: (await answer(call, question)) as ReplyOf<ReviewCalls, K> };
      } catch (error) {
        return { revision, reply: { problem: unexpected(error instanceof Error ? error.message : String(error)) } };
      }
    },
    listen: (listener) => void listeners.push(listener),
    kept: () => state,
    keep: (kept) => {
      state = kept;
    },
    close: () => {
      closed = true;
    },
  };
}

function openReply(review: CarriedReview, index: number): ReviewOpenReply {
  const { textures, beforeLabel, afterLabel, preferences, words, remark } = review;
  const texture = textures[index];
  const { path, oldPath, status, manifest, problems } = texture;
  return {
    key: String(index),
    path,
    oldPath,
    status,
    manifest,
    problems,
    beforeLabel,
    afterLabel,
    index,
    count: textures.length,
    lookedAt: 0,
    looked: 'no',
    abilities: { look: null, proof: null },
    rows: textures.map(({ path: name, status: how, verdict, impact }) => ({
      path: name,
      status: how,
      verdict,
      impact,
    })),
    preferences,
    words,
    remark,
  };
}

async function sideOf(
  source: Document,
  side: CarriedSide,
  index: number,
  which: 'before' | 'after',
): Promise<PairSide> {
  if (side.kind !== 'file') return side;
  const bytes = await carriedBytes(source, sideBlock(index, which));
  if (bytes === null) return { kind: 'problem', problem: { code: 'file-empty', severity: 'error', values: {} } };
  return { ...side, bytes };
}

function unexpected(reason: string): Problem {
  return { code: 'unexpected', severity: 'error', values: { reason } };
}
