import { expect, test } from 'vitest';
import { decodeImage } from '../../core/codec/decode.ts';
import { openImage } from '../../core/codec/open.ts';
import { ProofBench } from '../../core/proof/bench.ts';
import { ReviewBench } from '../../core/review/bench.ts';
import { HIDDEN_MARK, type PairAnswer, type PairSide } from '../../core/review/want.ts';
import { nodePorts } from '../../extension/node/ports/ports.ts';
import { encodePng } from '../demo/paint/png.ts';
import { disc, grain, halved } from '../fixtures/branch.ts';
import { treatment } from '../fixtures/treatment.ts';

const running = { cancelled: false };

const sideOf = (bytes: Uint8Array): PairSide => ({
  kind: 'file',
  path: 'a.png',
  bytes: new Uint8Array(bytes).buffer as ArrayBuffer,
  treatment: treatment(),
});

const open = (before: PairSide, after: PairSide) => new ReviewBench(before, after, nodePorts, { memoryBytes: 2 ** 28 });

const pairOf = (bench: ReviewBench, level: number) =>
  bench.answer({ kind: 'pair', image: { level } }, running) as Promise<PairAnswer>;

test('the pictures of a pair are the prints of a proof, and its difference is the one of the review', async () => {
  const [one, two] = [encodePng(grain(32, 1)), encodePng(grain(32, 2))];
  const bench = open(sideOf(one), sideOf(two));
  const pair = await pairOf(bench, 1);
  const ports = { ...nodePorts, pause: async () => undefined };
  for (const [bytes, shown] of [
    [one, pair.before],
    [two, pair.after],
  ] as const) {
    const proof = await ProofBench.open(bytes, 'a.png', ports);
    const print = await proof.answer({ kind: 'print', treatment: treatment(), image: { level: 1 } }, running);
    expect('picture' in print && print.picture).toEqual(shown?.picture);
  }
  const answer = await bench.answer({ kind: 'review' }, running);
  expect('review' in answer && answer.review.sizes[1].difference).toEqual(pair.difference);
  expect(pair.marks?.filter((mark) => mark > 0)).toHaveLength(pair.difference!.texels);
});

test('marks tell what is hidden from what is seen', async () => {
  const touched = disc([7, 0, 0]);
  touched.codes.set([0, 0, 0], (16 * 32 + 16) * 4);
  const { marks } = await pairOf(open(sideOf(encodePng(disc([0, 0, 0]))), sideOf(encodePng(touched))), 0);
  expect(marks?.[0]).toBe(HIDDEN_MARK);
  expect(marks?.[16 * 32 + 16]).toBe(250);
  expect(marks?.[16 * 32 + 17]).toBe(0);
});

test('a version of another extent is shown at the extent of the other', async () => {
  const whole = encodePng(grain(32, 1));
  const { before, after } = await pairOf(open(sideOf(whole), sideOf(encodePng(halved(grain(32, 1))))), 0);
  expect([before?.picture.extent.width, after?.picture.extent.width, after?.figures.extent.width]).toEqual([
    32, 32, 16,
  ]);
  const source = await decodeImage(openImage(whole, 'a.png', nodePorts.inflate));
  expect('codes' in source && source.codes).toEqual(before?.picture.codes);
});

test('one version alone is shown, and a problem in the place of the other', async () => {
  const whole = sideOf(encodePng(grain(32, 1)));
  expect(await pairOf(open({ kind: 'none' }, whole), 0)).toMatchObject({ before: null, difference: null, marks: null });
  const problem = { code: 'lfs-missing', severity: 'error', values: { bytes: 1 } } as const;
  const bench = open(whole, { kind: 'problem', problem });
  expect(await pairOf(bench, 0)).toMatchObject({ after: null });
  expect(await bench.answer({ kind: 'review' }, running)).toMatchObject({
    review: { verdict: { kind: 'unreadable' }, problems: [{ side: 'after', problem }] },
  });
});
