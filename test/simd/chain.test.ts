import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildChain, type Chain } from '../../core/chain/chain.ts';
import { Refusal } from '../../core/problem.ts';
import type { IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';
import type { Engine } from '../../core/resample/engine.ts';
import { plainEngine } from '../../core/resample/plain.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { sources, treatments } from '../fixtures/any.ts';
import { simdEngine } from '../fixtures/simd.ts';
import { holds } from '../laws/holds.ts';

// One engine serves all cases: its memory goes from pass to pass, with what earlier ones left in it.

const simd = simdEngine();

it('builds what the plain engine builds, whatever the image and its settings', () => {
  let built = 0;
  holds(fc.tuple(sources, treatments), 700, ([source, one]) => {
    for (const light of ['coded', 'linear'] as const) {
      const [expected, actual] = [plainEngine, simd].map((engine) => outcomeOf(source, one, engine, light));
      expect(actual).toEqual(expected);
      if (typeof expected !== 'string') built++;
    }
  });
  expect(built).toBeGreaterThan(250);
});

/** Everything of a chain that may depend on its engine, or the code of its refusal. */
function outcomeOf(
  source: StraightRaster | IndexedRaster,
  treatment: Treatment,
  engine: Engine,
  light: 'coded' | 'linear',
): Pick<Chain, 'images' | 'notes'> | string {
  try {
    const { images, notes, lengths } = buildChain(source, treatment, { engine, light });
    return { images, notes, ...{ lengths: [...lengths.values()] } };
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    return error.problem.code;
  }
}
