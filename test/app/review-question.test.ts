import { expect, test } from 'vitest';
import { Refusal } from '../../core/problem.ts';
import { PROTOCOL } from '../../core/protocol.ts';
import { readReviewRequest } from '../../extension/app/review/question.ts';

const asked = (call: string, question: unknown) => ({ protocol: PROTOCOL, kind: 'ask', id: 1, call, question });

test.each([
  ['open', null],
  ['sides', null],
  ['go', { index: 3 }],
  ['look', { looked: 'yes' }],
  ['proof', null],
  ['copy', { text: 'x' }],
])('%s is understood', (call, question) => {
  expect(readReviewRequest(asked(call, question))).toMatchObject({ call, question });
});

test.each([
  ['a call of a proof’s page', asked('build', null)],
  ['a place that is no whole number', asked('go', { index: 0.5 })],
  ['a place before the first', asked('go', { index: -1 })],
  ['a path in place of a place', asked('go', { index: '../a' })],
  ['more than is asked for', asked('look', { looked: 'yes', path: 'a' })],
  ['another mark', asked('look', { looked: 'perhaps' })],
  ['text without end', asked('copy', { text: 'x'.repeat(2 ** 20 + 1) })],
  ['a property of every object', asked('toString', null)],
  ['noise', 'noise'],
])('%s is refused', (_, message) => {
  expect(() => readReviewRequest(message)).toThrow(Refusal);
});
