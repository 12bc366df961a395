import { light, percent } from '../../../core/figures.ts';
import { findKernel } from '../../../core/kernel/table.ts';
import type { PrintStats } from '../../../core/proof/want.ts';
import type { Model } from '../state/model.ts';
import { t } from '../words/t.ts';
import type { Curve } from './curve.ts';

/** The curves that a texture has by its treatment: what should not move from level to level, and what should stay under a limit.
 *  Their rows stand before there is anything to draw in them, so that nothing moves when there is. */
export function curvesOf(model: Model): readonly Curve[] {
  const { treatment, header } = model;
  if (treatment === null || header === null) return [];
  const normal = treatment.content === 'normal' || Object.values(treatment.channels ?? {}).includes('normal');
  const curves: Curve[] = [];
  if (treatment.alpha.use === 'mask' && header.channels % 2 === 0) curves.push(coverageCurve(model));
  if (treatment.content === 'color' && !normal) curves.push(luminanceCurve(model));
  if (normal) curves.push(lengthCurve(model));
  else if (findKernel(treatment.kernel.minify.name)?.kind === 'weights') curves.push(haloCurve(model));
  return curves;
}

function coverageCurve(model: Model): Curve {
  const points = pointsOf(model, (stats) => stats.coverage);
  const base = points[0]?.value ?? 0;
  const { thinning } = model.treatment!.limits;
  return {
    name: t('coverage'),
    points,
    low: Math.max(0, base - 0.1),
    high: Math.min(1, base + 0.1),
    floor: thinning === null || points.length === 0 ? null : base * (1 - thinning),
    ceiling: null,
    format: percent,
  };
}

function luminanceCurve(model: Model): Curve {
  const points = pointsOf(model, (stats) => stats.luminance);
  const base = points[0]?.value ?? 0;
  return {
    name: t('luminance'),
    points,
    low: base * 0.9,
    high: base * 1.1 || 0.1,
    floor: null,
    ceiling: null,
    format: light,
  };
}

function lengthCurve(model: Model): Curve {
  const points = pointsOf(model, (stats) => stats.normalLength);
  return { name: t('normal length'), points, low: 0.8, high: 1, floor: null, ceiling: null, format: light };
}

function haloCurve(model: Model): Curve {
  const halo = model.levels()?.halo ?? null;
  const points = halo?.map(({ level, worst }) => ({ lod: level, value: worst })) ?? [];
  return {
    name: t('halo'),
    points: halo === null ? [] : [{ lod: 0, value: 0 }, ...points],
    low: 0,
    high: 16,
    floor: null,
    ceiling: model.treatment!.limits.halo,
    format: (value) => value.toFixed(1),
  };
}

function pointsOf(model: Model, of: (stats: PrintStats) => number | null): Curve['points'] {
  return (model.levels()?.levels ?? []).flatMap(({ level, stats }) => {
    const value = of(stats);
    return value === null ? [] : [{ lod: level, value }];
  });
}
