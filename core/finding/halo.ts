import { boundSteps } from '../chain/bounds.ts';
import { headOf } from '../chain/chain.ts';
import { planSheet } from '../chain/grid.ts';
import {
  type ChainPlan,
  type PlannedLevel,
  type PlannedTarget,
  passOf,
  pictureExtent,
  planChain,
} from '../chain/plan.ts';
import { cellTreatment } from '../chain/sheet.ts';
import { decodeTable, encodeSrgb } from '../color/transfer.ts';
import { type Extent, expandIndexed, type IndexedRaster, maxCode, type StraightRaster } from '../raster/raster.ts';
import { cutRegion } from '../raster/region.ts';
import { CLIP_SLACK } from '../resample/clip.ts';
import { floatChannels } from '../resample/decode.ts';
import type { Layout, Role } from '../resample/encoding.ts';
import type { Engine, Step } from '../resample/engine.ts';
import { plainEngine } from '../resample/plain.ts';
import type { Treatment } from '../treatment/treatment.ts';

/** Overshoot of one level or target beyond the local range of the source, before anything is clamped. */
export interface Halo {
  /** The level's number, or the target's name. */
  readonly image: number | string;
  /** Largest overshoot of any channel, in 8-bit codes (16-bit codes / 257). */
  readonly worst: number;
  /** Where it is, in the image; of a sheet, in the whole of it. */
  readonly x: number;
  readonly y: number;
  /** Share of visible texels that overshoot by more than half a code. */
  readonly share: number;
  /** Share of visible texels of which clamping changes a channel. */
  readonly clipped: number;
}

/** Told of every visible texel that overshoots by more than half an 8-bit code, or of which clamping changes a channel.
 *  Images come as `Halo` names them; of a sheet, places are in the whole of it. */
export type HaloWatch = (
  image: number | string,
  x: number,
  y: number,
  found: {
    /** The channels that overshoot by more than half a code, a bit each: 1 is the first. */
    readonly above: number;
    readonly below: number;
    readonly clips: boolean;
  },
) => void;

/** Measures every image of the chain that is made from weights; others do not overshoot. The local range is that of the
 *  visible source texels that the target's area touches, and one more on each side. Weights that are nowhere negative only
 *  average: what they bring from beyond that range is blur, and counts 0. Color that alpha weighs counts as far as it
 *  shows, times alpha: dividing by a small alpha makes any color large. Texels whose alpha rounds to 0 are not seen and do not count; normals are made unit and do not either. */
export function measureHalo(
  source: StraightRaster | IndexedRaster,
  treatment: Treatment,
  engine: Engine = plainEngine,
  watch?: HaloWatch,
): readonly Halo[] {
  const steps = haloSteps(source, treatment, engine, watch);
  for (;;) {
    const { done, value } = steps.next();
    if (done === true) return value;
  }
}

/** The same in pieces of some milliseconds, so that others can work between them, or it can be left. `known` keeps ranges of this very
 *  source from one treatment to the next. */
export function* haloSteps(
  source: StraightRaster | IndexedRaster,
  treatment: Treatment,
  engine: Engine = plainEngine,
  watch?: HaloWatch,
  known?: KnownRanges,
): Generator<undefined, readonly Halo[]> {
  const raster = source.kind === 'indexed' ? expandIndexed(source) : source;
  if (treatment.grid === null) return yield* measureChain(raster, treatment, { left: 0, top: 0 }, engine, watch, known);
  const sheet = planSheet(raster.extent, treatment.grid);
  const alone = cellTreatment(treatment, sheet);
  const pitch = { width: sheet.cell.width + 2 * sheet.gutter, height: sheet.cell.height + 2 * sheet.gutter };
  const cells: Halo[][] = [];
  for (let top = sheet.gutter; top < raster.extent.height; top += pitch.height) {
    for (let left = sheet.gutter; left < raster.extent.width; left += pitch.width) {
      cells.push([
        ...(yield* measureChain(cutRegion(raster, left, top, sheet.cell), alone, { left, top }, engine, watch)),
      ]);
    }
  }
  return cells[0].map((_, index) => worstOf(cells.map((cell) => cell[index])));
}

/** The largest of the same image in all cells; shares are means. */
function worstOf(cells: readonly Halo[]): Halo {
  const worst = cells.reduce((most, each) => (each.worst > most.worst ? each : most));
  const mean = (of: (halo: Halo) => number): number => cells.reduce((sum, each) => sum + of(each), 0) / cells.length;
  return { ...worst, share: mean((halo) => halo.share), clipped: mean((halo) => halo.clipped) };
}

/** `place` is where the raster stands in the whole source; halos are placed in the whole of their image. */
function* measureChain(
  raster: StraightRaster,
  treatment: Treatment,
  place: { readonly left: number; readonly top: number },
  engine: Engine,
  watch?: HaloWatch,
  known?: KnownRanges,
): Generator<undefined, readonly Halo[]> {
  const plan = planChain(headOf(raster), treatment);
  const { pass, nodes } = passOf(plan);
  const shipped = (image: PlannedLevel | PlannedTarget): boolean => !('level' in image) || image.shipped;
  if (!pass.steps.some(hasLobes)) return nodes.filter(shipped).map(noHalo);
  const ranges = yield* rangesOf(plan, raster, known);
  const stride = floatChannels(pass.decoding);
  const probes = nodes.map((image, index) => {
    const whole = wholeOf(raster.extent, pictureExtent(image), place);
    const watched: HaloWatch | undefined =
      watch && hasLobes(pass.steps[index]) ? (name, x, y, found) => watch(name, ...whole(x, y), found) : undefined;
    return new Probe(plan.layout, stride, image, ranges.get(image)!, watched);
  });
  const run = engine.open(pass, (node, y, floats) => {
    if (node > 0) probes[node - 1].take(y, floats);
  });
  const length = raster.extent.width * raster.channels;
  const rowsAtOnce = Math.max(1, Math.floor(TEXELS_AT_ONCE / raster.extent.width));
  for (let y = 0; y < raster.extent.height; y++) {
    run.push(raster.codes.subarray(y * length, (y + 1) * length));
    if (y % rowsAtOnce === rowsAtOnce - 1) yield;
  }
  return probes.flatMap((probe, index) => {
    const { image } = probe;
    if (!shipped(image)) return [];
    if (!hasLobes(pass.steps[index])) return [noHalo(image)];
    const halo = probe.halo();
    const [x, y] = wholeOf(raster.extent, pictureExtent(image), place)(halo.x, halo.y);
    return [{ ...halo, x, y }];
  });
}

/** From texels of a cell's image to those of the whole image; levels stop where a cell would begin at no whole texel. */
function wholeOf(
  cell: Extent,
  picture: Extent,
  place: { readonly left: number; readonly top: number },
): (x: number, y: number) => [number, number] {
  const left = (place.left * picture.width) / cell.width;
  const top = (place.top * picture.height) / cell.height;
  return (x, y) => [x + left, y + top];
}

/** Source texels that are filtered and looked at in one piece. */
const TEXELS_AT_ONCE = 1 << 17;

/** Whether the step has negative weights. */
function hasLobes({ x, y }: Step): boolean {
  return [x, y].some(({ weights }) => weights.some((weight) => weight < 0));
}

function noHalo(image: PlannedLevel | PlannedTarget): Halo {
  return { image: nameOf(image), worst: 0, x: 0, y: 0, share: 0, clipped: 0 };
}

function nameOf(image: PlannedLevel | PlannedTarget): number | string {
  return 'level' in image ? image.level : image.target.name;
}

/** Where ranges are kept: they hang on the source, on extents and on wrap, but on no kernel. */
export interface KnownRanges {
  get(key: string): readonly Range[] | undefined;
  put(key: string, ranges: readonly Range[]): void;
}

/** Bounds of the visible codes for every texel of an image. */
export interface Range {
  readonly min: StraightRaster;
  readonly max: StraightRaster;
}

/** For every image of a plan: levels from the level before, targets from level 0. */
function* rangesOf(
  plan: ChainPlan,
  raster: StraightRaster,
  known?: KnownRanges,
): Generator<undefined, ReadonlyMap<PlannedLevel | PlannedTarget, Range>> {
  const { wrap } = plan.treatment;
  const levels = plan.levels.slice(1);
  const images = [...levels, ...plan.targets];
  const { alpha, weighted } = plan.layout;
  const hidingAlpha = weighted.length > 0 ? alpha : null;
  const key = JSON.stringify([images.map(pictureExtent), levels.length, wrap, hidingAlpha]);
  let ranges = known?.get(key);
  if (ranges === undefined) {
    ranges = yield* measureRanges(plan, raster);
    known?.put(key, ranges);
  }
  return new Map(images.map((image, index) => [image, ranges[index]]));
}

function* measureRanges(plan: ChainPlan, raster: StraightRaster): Generator<undefined, readonly Range[]> {
  const { wrap } = plan.treatment;
  const base: Range = {
    min: hiddenAs(raster, plan.layout, maxCode(raster.depth)),
    max: hiddenAs(raster, plan.layout, 0),
  };
  const bound = function* (range: Range, image: PlannedLevel | PlannedTarget): Generator<undefined, Range> {
    const min = yield* boundSteps(range.min, pictureExtent(image), wrap, 'min');
    return { min, max: yield* boundSteps(range.max, pictureExtent(image), wrap, 'max') };
  };
  const ranges: Range[] = [];
  let finer = base;
  for (const level of plan.levels.slice(1)) {
    finer = yield* bound(finer, level);
    ranges.push(finer);
  }
  for (const target of plan.targets) ranges.push(yield* bound(base, target));
  return ranges;
}

/** Color under alpha 0 takes no part in the range: it is set to the code that never decides it. */
function hiddenAs(raster: StraightRaster, layout: Layout, code: number): StraightRaster {
  const { alpha } = layout;
  if (alpha === null || layout.weighted.length === 0) return raster;
  const codes = raster.codes.slice();
  for (let at = 0; at < codes.length; at += raster.channels) {
    if (codes[at + alpha] !== 0) continue;
    for (let channel = 0; channel < raster.channels; channel++) if (channel !== alpha) codes[at + channel] = code;
  }
  return { ...raster, codes };
}

/** Compares float rows of one image with its range. */
class Probe {
  readonly image: PlannedLevel | PlannedTarget;
  readonly #layout: Layout;
  readonly #stride: number;
  readonly #range: Range;
  readonly #watch: HaloWatch | undefined;
  /** By channel, what each code was decoded to; null for channels that do not count. */
  readonly #decoded: readonly (Float32Array | null)[];
  #worst = 0;
  #x = 0;
  #y = 0;
  #visible = 0;
  #over = 0;
  #clipped = 0;

  constructor(
    layout: Layout,
    stride: number,
    image: PlannedLevel | PlannedTarget,
    range: Range,
    watch: HaloWatch | undefined,
  ) {
    this.image = image;
    this.#layout = layout;
    this.#stride = stride;
    this.#range = range;
    this.#watch = watch;
    this.#decoded = layout.roles.map((role) => {
      if (role.kind === 'normal' || role.kind === 'unused' || role.kind === 'roughness') return null;
      return decodeTable(layout.depth, role.kind === 'color' ? role.transfer : 'linear');
    });
  }

  take(y: number, floats: Float32Array): void {
    const { channels, alpha, depth, roles, weighted } = this.#layout;
    const { min, max } = this.#range;
    const unit = 255 / maxCode(depth);
    for (let x = 0, at = 0; at < floats.length; x++, at += this.#stride) {
      if (alpha !== null && floats[at + alpha] * unit < 0.5) continue;
      this.#visible++;
      const texel = (y * pictureExtent(this.image).width + x) * channels;
      let [most, overIn, underIn] = [0, 0, 0];
      let clips = false;
      for (let channel = 0; channel < channels; channel++) {
        const decoded = this.#decoded[channel];
        if (decoded === null) continue;
        const value = weighted.includes(channel) ? floats[at + channel] / floats[at + alpha!] : floats[at + channel];
        // Most texels lie within: that is seen without the curve.
        if (value >= decoded[min.codes[texel + channel]] && value <= decoded[max.codes[texel + channel]]) continue;
        const shown = weighted.includes(channel) ? Math.min(1, (floats[at + alpha!] * unit) / 255) : 1;
        const code = codeOf(value, roles[channel], unit);
        const above = (code - max.codes[texel + channel] * unit) * shown;
        const below = (min.codes[texel + channel] * unit - code) * shown;
        most = Math.max(most, above, below);
        if (above > 0.5) overIn |= 1 << channel;
        if (below > 0.5) underIn |= 1 << channel;
        if (code < -255 * CLIP_SLACK || code > 255 * (1 + CLIP_SLACK)) clips = true;
      }
      if (most > 0.5) this.#over++;
      if (clips) this.#clipped++;
      if (most > 0.5 || clips) this.#watch?.(nameOf(this.image), x, y, { above: overIn, below: underIn, clips });
      if (most > this.#worst) {
        this.#worst = most;
        this.#x = x;
        this.#y = y;
      }
    }
  }

  halo(): Halo {
    const { image } = this;
    const share = (count: number): number => (this.#visible === 0 ? 0 : count / this.#visible);
    return {
      image: nameOf(image),
      worst: this.#worst,
      x: this.#x,
      y: this.#y,
      share: share(this.#over),
      clipped: share(this.#clipped),
    };
  }
}

/** The value as an unrounded, unclamped 8-bit code. */
function codeOf(value: number, role: Role, unit: number): number {
  return role.kind === 'color' && role.transfer === 'srgb' ? encodeSrgb(value) * 255 : value * unit;
}
