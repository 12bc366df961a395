import * as defaults from './defaults.ts';
import { kernelFor } from './kernel-direction.ts';
import { standard } from './keys.ts';
import type { Patch } from './merge.ts';
import { resolveTarget, type TargetSetting } from './text/target.ts';
import type { Limits, Origin, ReviewLimits, Roughness, Texture, Treatment } from './treatment.ts';

/** The treatment that merged rules make, built-in defaults filled in, and where each leaf is from, in the order of keys.ts.
 *  `path` is the settings file's. */
export function completePatch(
  merged: Patch,
  path: string | undefined,
): Pick<Texture, 'treatment' | 'review' | 'origins'> {
  const origins: Origin[] = [];

  function take<T>(key: string, fallback: T = standard<T>(key)): T {
    const entry = merged.get(key);
    if (entry === undefined) origins.push({ key, value: fallback, rule: 'built-in' });
    else
      origins.push({ key, value: entry.value, rule: entry.rule, ...(path === undefined ? {} : { path }), ...entry.at });
    return entry === undefined ? fallback : (entry.value as T);
  }

  function takeKernel(direction: 'minify' | 'magnify') {
    const key = `kernel.${direction}`;
    const choice = kernelFor(direction, merged.get(key), content);
    if (choice.from === 'entry') return take(key, choice.kernel);
    origins.push({ key, value: choice.kernel, rule: 'built-in' });
    return choice.kernel;
  }

  function takeLevels(): Treatment['levels'] {
    if (merged.has('levels')) return take<'none'>('levels', 'none');
    return { first: take<number>('levels.first'), last: take<number | null>('levels.last') };
  }

  function takeGrid(): Treatment['grid'] {
    if (!merged.has('grid.cell')) return take('grid', null);
    return { cell: take<readonly [number, number]>('grid.cell'), gutter: take<number>('grid.gutter') };
  }

  function takeRoughness(): Roughness {
    if (merged.has('normal.roughness.path')) {
      const path = take<string>('normal.roughness.path');
      return { path, channel: take<'r' | 'g' | 'b' | 'a'>('normal.roughness.channel') };
    }
    const constant = take<number | null>('normal.roughness');
    return constant === null ? null : { constant };
  }

  function takeBudget(): Limits['overBudget'] {
    if (!merged.has('limits.over-budget.bytes')) return take('limits.over-budget', null);
    return { bytes: take<number>('limits.over-budget.bytes'), format: take<string>('limits.over-budget.format') };
  }

  const packed = (merged.get('channels')?.value ?? null) as Treatment['channels'];
  const content = take('content', defaults.defaultContent(packed));
  const channels = take<Treatment['channels']>('channels');
  const transfer = take('transfer', defaults.defaultTransfer(content, channels));
  const light = take<Treatment['light']>('light');
  const use = take('alpha.use', defaults.defaultAlphaUse(content, channels));
  const alpha: Treatment['alpha'] = {
    use,
    cutoff: take('alpha.cutoff'),
    test: take('alpha.test'),
    keepCoverage: take('alpha.keepCoverage', use === 'mask'),
    store: take('alpha.store'),
    weight: take('alpha.weight'),
  };
  const fill = take<Treatment['fill']>('fill', defaults.defaultFill(use));
  const kernel = { minify: takeKernel('minify'), magnify: takeKernel('magnify') };
  const treatment: Treatment = {
    content,
    channels,
    transfer,
    light,
    alpha,
    fill,
    kernel,
    derive: take('derive', defaults.defaultDerive(kernel.minify)),
    wrap: { x: take('wrap.x'), y: take('wrap.y') },
    levels: takeLevels(),
    targets: take<readonly TargetSetting[]>('targets').map(resolveTarget),
    grid: takeGrid(),
    depth: take('depth'),
    outputs: take('outputs'),
    name: take('name'),
    ktx2: { supercompress: take('ktx2.supercompress'), format: take('ktx2.format') },
    normal: {
      count: take('normal.count', defaults.defaultNormalCount(channels)),
      y: take('normal.y'),
      base: take('normal.base'),
      roughness: takeRoughness(),
    },
    height: { minmax: take('height.minmax') },
    png: { base: take('png.base') },
    colorChunks: take('colorChunks'),
    view: {
      texelsPerMeter: take('view.texelsPerMeter'),
      fovY: take('view.fovY'),
      screenHeight: take('view.screenHeight'),
      blend: take('view.blend'),
    },
    limits: { thinning: take('limits.thinning'), halo: take('limits.halo'), overBudget: takeBudget() },
  };
  const review: ReviewLimits = {
    coverageLoss: take('review.coverageLoss'),
    lightChange: take('review.lightChange'),
    texelLoss: take('review.texelLoss'),
    fileGrowth: take('review.fileGrowth'),
    memoryGrowth: take('review.memoryGrowth'),
    harm: take('review.harm'),
  };
  return { treatment, review, origins };
}
