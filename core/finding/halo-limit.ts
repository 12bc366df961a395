import { finding, type Problem } from '../problem.ts';
import type { Halo } from './halo.ts';

/** The image that overshoots most, where that is more than the limit allows; `null` otherwise. */
export function overHalo(halos: readonly Halo[], limit: number): Problem | null {
  const worst = halos.reduce<Halo | null>(
    (most, each) => (most === null || each.worst > most.worst ? each : most),
    null,
  );
  if (worst === null || worst.worst <= limit) return null;
  const { image, x, y, share, clipped } = worst;
  return finding('halo', {
    image: typeof image === 'number' ? `level ${image}` : `target ${image}`,
    x,
    y,
    worst: tenths(worst.worst),
    share: `${tenths(share * 100)} %`,
    clipped: `${tenths(clipped * 100)} %`,
    limit,
  });
}

function tenths(value: number): number {
  return Math.round(value * 10) / 10;
}
