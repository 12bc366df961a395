import fc from 'fast-check';

/** Checks a law on `runs` random cases. A failure prints its seed and path; SEED repeats the run of a seed. */
export function holds<T>(cases: fc.Arbitrary<T>, runs: number, law: (one: T) => void): void {
  const seed = process.env.SEED === undefined ? {} : { seed: Number(process.env.SEED) };
  fc.assert(fc.property(cases, law), { numRuns: runs, ...seed });
}
