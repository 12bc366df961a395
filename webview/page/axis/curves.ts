import type { PrintStats } from '../../../core/proof/want.ts';
import type { Model } from '../proof/model.ts';
import { light, percent } from '../words/figures.ts';
import { t } from '../words/t.ts';
import type { Curve } from './curve.ts';

/** The curves that the texture has: what should not move from level to level, and what should stay under a limit. */
export function curvesOf(model: Model): readonly Curve[] {
  const answer = model.levels();
  const { treatment } = model;
  if (answer === null || treatment === null) return [];
  const { levels } = answer;
  const points = (of: (stats: PrintStats) => number | null) =>
    levels.flatMap(({ level, stats }) => {
      const value = of(stats);
      return value === null ? [] : [{ lod: level, value }];
    });
  const curves: Curve[] = [];
  const coverage = points((stats) => stats.coverage);
  if (coverage.length > 0) {
    const { thinning } = treatment.limits;
    curves.push({
      name: t('coverage'),
      points: coverage,
      low: Math.max(0, coverage[0].value - 0.1),
      high: Math.min(1, coverage[0].value + 0.1),
      floor: thinning === null ? null : coverage[0].value * (1 - thinning),
      ceiling: null,
      format: percent,
    });
  }
  const luminance = points((stats) => stats.luminance);
  if (luminance.length > 0) {
    const [{ value: base }] = luminance;
    curves.push({
      name: t('luminance'),
      points: luminance,
      low: base * 0.9,
      high: base * 1.1 || 0.1,
      floor: null,
      ceiling: null,
      format: light,
    });
  }
  const lengths = points((stats) => stats.normalLength);
  if (lengths.length > 0) {
    curves.push({
      name: t('normal length'),
      points: lengths,
      low: 0.8,
      high: 1,
      floor: null,
      ceiling: null,
      format: light,
    });
  }
  if (answer.halo.some(({ worst }) => worst > 0)) {
    curves.push({
      name: t('halo'),
      points: [{ lod: 0, value: 0 }, ...answer.halo.map(({ level, worst }) => ({ lod: level, value: worst }))],
      low: 0,
      high: 16,
      floor: null,
      ceiling: treatment.limits.halo,
      format: (value) => value.toFixed(1),
    });
  }
  return curves;
}
