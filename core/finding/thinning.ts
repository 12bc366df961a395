import type { Manifest } from '../manifest/manifest.ts';
import { finding, type Problem } from '../problem.ts';

/** Smaller levels are not judged: a few texels cannot hold a share, and a texture that small is a handful of pixels. */
const LEAST_TEXELS = 64;

/** The level that loses most of level 0's coverage, where that is more than the limit allows; `null` otherwise, and for what
 *  is no mask. Where level 0 is not shipped the first level that is stands for it. */
export function thinning(manifest: Manifest): Problem | null {
  const limit = manifest.settings.limits.thinning;
  const covered = manifest.levels.filter((level) => level.use === 'image' && level.coverage !== undefined);
  const base = covered[0]?.coverage;
  if (limit === null || base === undefined || base === 0) return null;
  let level = 0;
  let worst = 0;
  for (const each of covered) {
    if (each.extent[0] * each.extent[1] < LEAST_TEXELS) continue;
    const loss = 1 - (each.coverage ?? 0) / base;
    if (loss > worst) [worst, level] = [loss, each.level ?? 0];
  }
  if (worst <= limit) return null;
  return finding('thinning', { level, share: percent(1 - worst), limit: percent(limit) });
}

/** A share to a tenth of a percent. */
function percent(share: number): string {
  return `${Math.round(share * 1000) / 10} %`;
}
