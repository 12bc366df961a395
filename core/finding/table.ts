import type { Manifest } from '../manifest/manifest.ts';
import type { Problem } from '../problem.ts';
import type { Limits } from '../treatment/treatment.ts';
import { overBudget } from './over-budget.ts';
import { thinning } from './thinning.ts';

/** Something measured that would be seen, with its number, its limit and what to do about it. */
export interface Finding {
  readonly name: string;
  readonly measures: string;
  /** The setting below `limits` that it is held against; `null` where nothing but none will do. */
  readonly limit: keyof Limits | null;
  /** What it needs: the manifest alone, the files as they are now, or the chain run again. */
  readonly from: 'manifest' | 'files' | 'chain';
  /** Judges a texture by its manifest; only where that is enough. */
  readonly judge?: (manifest: Manifest) => Problem | null;
}

/** Every finding there is. */
export const findings: readonly Finding[] = [
  {
    name: 'thinning',
    measures: 'Coverage of each level against level 0, at the cutoff.',
    limit: 'thinning',
    from: 'manifest',
    judge: thinning,
  },
  {
    name: 'halo',
    measures: 'Overshoot beyond the range of the source around it, before clamping, in 8-bit codes.',
    limit: 'halo',
    from: 'chain',
  },
  {
    name: 'over-budget',
    measures: 'Bytes of the chain in a GPU format, whole blocks.',
    limit: 'overBudget',
    from: 'manifest',
    judge: overBudget,
  },
  {
    name: 'stale',
    measures: 'Which of source, settings, algorithm and output moved since the build.',
    limit: null,
    from: 'files',
  },
  {
    name: 'not-downloaded',
    measures: 'A Git LFS pointer where an image should be.',
    limit: null,
    from: 'files',
  },
];

/** What a manifest alone tells against its limits. */
export function judgeManifest(manifest: Manifest): Problem[] {
  return findings.flatMap((each) => each.judge?.(manifest) ?? []);
}
