/** Something that can be timed against others. */
export interface Contender {
  readonly name: string;
  /** Does the work once. What it answers goes to `checksum`, outside the clock. */
  readonly run: () => unknown;
}

/** Milliseconds of each round, in the order of the rounds. */
export type Times = readonly number[];

/** Runs all contenders once to warm up, unless they have run already, then in turn, one run of each a round: a machine whose speed drifts drifts for all of
 *  them. Nothing but the call is inside the clock. */
export async function alternate(
  contenders: readonly Contender[],
  rounds: number,
  state: 'cold' | 'ready' = 'cold',
): Promise<readonly Times[]> {
  if (state === 'cold') for (const { run } of contenders) await run();
  const times = contenders.map((): number[] => []);
  for (let round = 0; round < rounds; round++) {
    for (let step = 0; step < contenders.length; step++) {
      // Each begins a round as often as any other: the first after a heavy one finds a cold cache.
      const index = (step + round) % contenders.length;
      const start = performance.now();
      await contenders[index].run();
      times[index].push(performance.now() - start);
    }
  }
  return times;
}

/** Milliseconds that one call takes. */
export async function clock(run: () => unknown): Promise<number> {
  const start = performance.now();
  await run();
  return performance.now() - start;
}

export function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}

export function least(values: readonly number[]): number {
  return values.reduce((a, b) => Math.min(a, b));
}

export function most(values: readonly number[]): number {
  return values.reduce((a, b) => Math.max(a, b));
}

/** How many times as long `theirs` took as `ours`: the median of the rounds' own ratios. */
export function ratio(theirs: Times, ours: Times): number {
  return median(theirs.map((time, round) => time / ours[round]));
}
