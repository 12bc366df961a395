import { buildChain, type Chain, type ChainOptions, ChainRun, headOf } from '../chain/chain.ts';
import type { ChainImage } from '../chain/image.ts';
import type { TargetPlace } from '../chain/levels.ts';
import { constantRoughness, roughnessChain, roughnessOfMap } from '../chain/roughness.ts';
import { decodeImage } from '../codec/decode.ts';
import { openImage } from '../codec/open.ts';
import { hashSteps } from '../codec/pixels.ts';
import type { SourceHeader } from '../codec/source.ts';
import { obeyedGamma } from '../codec/tag.ts';
import { type Halo, haloSteps, type KnownRanges, type Range } from '../finding/halo.ts';
import { type Cancel, Cancelled, type PngTools, type Ports } from '../port.ts';
import type { IndexedRaster, StraightRaster } from '../raster/raster.ts';
import type { Engine } from '../resample/engine.ts';
import type { Treatment } from '../treatment/treatment.ts';
import { evennessOf } from './evenness.ts';
import { footprintOf } from './footprint.ts';
import { offPaletteOf, paletteOf } from './palette.ts';
import { copyPicture, cutMiddle, pictureOf } from './picture.ts';
import { seenPicture } from './sample.ts';
import { sectionOf } from './section.ts';
import { Shelf } from './shelf.ts';
import { treatmentFor } from './variant.ts';
import {
  type Answer,
  type ArtAnswer,
  CUT_SIDE,
  type HaloAnswer,
  haloMark,
  type LevelsAnswer,
  type Picture,
  type PixelsAnswer,
  type Print,
  type PrintImage,
  type PrintStats,
  type SideOutput,
  type Want,
} from './want.ts';

/** What a bench needs beside the build's ports. */
export interface BenchPorts extends Pick<Ports, 'engine' | 'inflate' | 'newHash' | keyof PngTools> {
  /** Lets others work; asked for every few million operations. */
  readonly pause: () => Promise<void>;
}

/** One source file, opened, and the chains that treatments make of it. Its prints are what a build stores, code for code: both
 *  come from the same chain. */
export class ProofBench {
  readonly header: SourceHeader;
  readonly #source: StraightRaster | IndexedRaster;
  readonly #ports: BenchPorts;
  #roughness: Uint8Array | null = null;
  readonly #chains = new Shelf<Chain>(CHAIN_BYTES, chainSize);
  /** The same for every kernel. */
  readonly #ranges = new Shelf<readonly Range[]>(RANGE_BYTES, rangeSize);
  #palette: { readonly colors: ReadonlySet<number> | null } | null = null;
  readonly #halos = new Shelf<HaloMaps>(CHAIN_BYTES, (maps) => maps.bytes);

  private constructor(header: SourceHeader, source: StraightRaster | IndexedRaster, ports: BenchPorts) {
    this.header = header;
    this.#source = source;
    this.#ports = ports;
  }

  /** Reads an image file; `name` tells its extension, `roughness` is the map that its treatment names. Throws Refusal. */
  static async open(
    bytes: Uint8Array,
    name: string,
    ports: BenchPorts,
    roughness: Uint8Array | null = null,
  ): Promise<ProofBench> {
    const image = openImage(bytes, name, ports.inflate, ports);
    const bench = new ProofBench(image.header, await decodeImage(image), ports);
    bench.#roughness = roughness;
    return bench;
  }

  /** Throws Refusal where the treatment does not fit, Cancelled when asked to stop. */
  async answer(want: Want, cancel: Cancel): Promise<Answer> {
    switch (want.kind) {
      case 'print':
        return this.#print(want, cancel);
      case 'pixels':
        return this.#pixels(want, cancel);
      case 'levels':
        return this.#levels(want.treatment, cancel);
      case 'halo':
        return this.#halo(want.treatment, want.image, cancel);
      case 'art':
        return this.#art(want.treatment, want.image, cancel);
      case 'footprint': {
        const treatment = treatmentFor(want.treatment, want.image);
        return footprintOf(headOf(this.#source), treatment, want.image, want.x, want.y);
      }
      case 'section':
        return sectionOf(this.#source, want.from, want.to);
    }
  }

  async #print({ treatment, image, output }: Want & { readonly kind: 'print' }, cancel: Cancel): Promise<Print> {
    const chain = await this.#outputChain(treatmentFor(treatment, image), image, output, cancel);
    if ('lod' in image) {
      const picture = this.#seen(chain, treatment, image.lod, image.extent);
      const stats = statsOf(imageOf(chain, { level: Math.min(Math.round(image.lod), lastLevel(chain)) }));
      return { kind: 'print', picture, stats };
    }
    const found = imageOf(chain, image, output === 'roughness' ? 'image' : output);
    return { kind: 'print', picture: copyPicture(pictureOf(chain.plan, found.raster)), stats: statsOf(found) };
  }

  async #pixels(
    { treatment, image, output }: Want & { readonly kind: 'pixels' },
    cancel: Cancel,
  ): Promise<PixelsAnswer> {
    if ('lod' in image) return { kind: 'pixels', pixels: '' };
    const chain = await this.#outputChain(treatmentFor(treatment, image), image, output, cancel);
    const { raster } = imageOf(chain, image, output === 'roughness' ? 'image' : output);
    return { kind: 'pixels', pixels: await this.#inSteps(hashSteps(raster, this.#ports.newHash), cancel) };
  }

  async #outputChain(
    treatment: Treatment,
    image: PrintImage,
    output: SideOutput | undefined,
    cancel: Cancel,
  ): Promise<Chain> {
    const chain = await this.#chain(treatment, firstLevelOf(image), cancel);
    return output === 'roughness' ? this.#roughnessOf(chain) : chain;
  }

  /** What the build makes of the roughness map beside these normals. */
  async #roughnessOf(normals: Chain): Promise<Chain> {
    const { treatment } = normals.plan;
    const key = `roughness ${JSON.stringify(treatment)}`;
    const known = this.#chains.get(key);
    if (known !== undefined) return known;
    const chain = roughnessChain(await this.#roughnessBase(treatment), treatment, normals, this.#ports.engine);
    this.#chains.put(key, chain);
    return chain;
  }

  async #roughnessBase({ normal: { roughness } }: Treatment): Promise<StraightRaster> {
    const { extent } = this.header;
    if (roughness === null) throw new RangeError('Expected a treatment with roughness');
    if ('constant' in roughness) return constantRoughness(roughness.constant, extent);
    const file = openImage(this.#roughness ?? new Uint8Array(), roughness.path, this.#ports.inflate, this.#ports);
    return roughnessOfMap(await decodeImage(file), roughness.channel, extent);
  }

  #seen(chain: Chain, treatment: Treatment, lod: number, extent: Picture['extent']): Picture {
    const last = lastLevel(chain);
    const finer = Math.min(Math.floor(Math.max(0, lod)), last);
    const coarser = Math.min(finer + 1, last);
    const pictures = [finer, coarser].map((level) => pictureOf(chain.plan, imageOf(chain, { level }).raster));
    return seenPicture(pictures[0], pictures[1], Math.max(0, Math.min(lod, last) - finer), extent, treatment.wrap);
  }

  async #levels(treatment: Treatment, cancel: Cancel): Promise<LevelsAnswer> {
    const whole = treatmentFor(treatment, { level: 0 });
    const chain = await this.#chain(whole, 0, cancel);
    const { halos } = await this.#measure(whole, cancel);
    return {
      kind: 'levels',
      levels: chain.images
        .filter((image) => image.use === 'image' && image.level !== undefined)
        .map((image) => ({
          level: image.level!,
          extent: image.extent,
          stats: statsOf(image),
          cut: cutMiddle(pictureOf(chain.plan, image.raster), CUT_SIDE),
        })),
      halo: halos.map(({ image, worst, x, y }) => ({ level: image as number, worst, x, y })),
    };
  }

  async #halo(treatment: Treatment, image: PrintImage, cancel: Cancel): Promise<HaloAnswer> {
    if ('lod' in image) return { kind: 'halo', halo: null, marks: null };
    const maps = await this.#measure(treatmentFor(treatment, image), cancel);
    const name = 'level' in image ? image.level : image.target.name;
    const halo = maps.halos.find((each) => each.image === name) ?? null;
    return { kind: 'halo', halo, marks: maps.marks.get(name)?.slice() ?? null };
  }

  async #art(treatment: Treatment, image: PrintImage, cancel: Cancel): Promise<ArtAnswer> {
    if ('lod' in image) return { kind: 'art', off: null, even: null };
    this.#palette ??= { colors: paletteOf(this.#source) };
    const fitting = treatmentFor(treatment, image);
    const even = evennessOf(headOf(this.#source), fitting, image);
    if (this.#palette.colors === null) return { kind: 'art', off: null, even };
    const chain = await this.#chain(fitting, firstLevelOf(image), cancel);
    const picture = pictureOf(chain.plan, imageOf(chain, image).raster);
    return { kind: 'art', off: offPaletteOf(picture, this.#palette.colors), even };
  }

  async #measure(treatment: Treatment, cancel: Cancel): Promise<HaloMaps> {
    const key = JSON.stringify(treatment);
    const known = this.#halos.get(key);
    if (known !== undefined) return known;
    const steps = measureMaps(this.#source, treatment, this.#ports.engine, this.#ranges);
    const maps = await this.#inSteps(steps, cancel);
    this.#halos.put(key, maps);
    return maps;
  }

  async #inSteps<T>(steps: Generator<undefined, T>, cancel: Cancel): Promise<T> {
    for (;;) {
      const { done, value } = steps.next();
      if (done === true) return value;
      await this.#ports.pause();
      if (cancel.cancelled) throw new Cancelled();
    }
  }

  /** The chain from a level on: what is finer than a print takes most of the time, and nobody looks at it. */
  async #chain(whole: Treatment, first: number, cancel: Cancel): Promise<Chain> {
    const key = JSON.stringify(whole);
    const known = this.#chains.get(key);
    if (known !== undefined && firstLevel(known) <= first) return known;
    const treatment = whole.levels === 'none' ? whole : { ...whole, levels: { first, last: null } };
    const gamma = treatment.colorChunks === 'obey' ? obeyedGamma(this.header.colorChunks) : null;
    const { engine } = this.#ports;
    const options = { ...(engine !== undefined && { engine }), ...(gamma !== null && { gamma }) };
    const chain = await this.#build(treatment, options, cancel);
    this.#chains.put(key, chain);
    return chain;
  }

  async #build(treatment: Treatment, options: ChainOptions, cancel: Cancel): Promise<Chain> {
    const source = this.#source;
    if (treatment.grid !== null) return buildChain(source, treatment, options);
    const run = new ChainRun(headOf(source, options.gamma), treatment, options);
    if (source.kind === 'indexed') run.setPalette(source);
    run.hold(source);
    const { width, height } = source.extent;
    const samples = source.kind === 'indexed' ? source.indices : source.codes;
    const row = source.kind === 'indexed' ? width : width * source.channels;
    const rowsAtOnce = Math.max(1, Math.floor(TEXELS_AT_ONCE / width));
    for (let y = 0; y < height; y++) {
      run.push(samples.subarray(y * row, (y + 1) * row));
      if (y % rowsAtOnce !== rowsAtOnce - 1) continue;
      await this.#ports.pause();
      if (cancel.cancelled) throw new Cancelled();
    }
    return run.finish();
  }
}

/** Bytes of chains that are kept for when they are asked for again: three of a 4096x4096 RGBA chain. */
const CHAIN_BYTES = 256 * 1024 * 1024;

/** Bytes of the ranges that overshoot is measured against, kept from one kernel to the next: those of a 4096x4096 RGBA source take 43 MB. */
const RANGE_BYTES = 64 * 1024 * 1024;

/** Source texels between two pauses: some 4 ms of filtering by the SIMD engine, 40 ms by the plain one. */
const TEXELS_AT_ONCE = 1 << 18;

interface HaloMaps {
  readonly halos: readonly Halo[];
  readonly marks: ReadonlyMap<number | string, Uint16Array>;
  readonly bytes: number;
}

function* measureMaps(
  source: StraightRaster | IndexedRaster,
  treatment: Treatment,
  engine: Engine | undefined,
  known: KnownRanges,
): Generator<undefined, HaloMaps> {
  const marks = new Map<number | string, Uint16Array>();
  const { plan } = new ChainRun(headOf(source), { ...treatment, grid: null });
  const places = new Map<number | string, TargetPlace>();
  for (const { level, extent } of plan.levels) places.set(level, { whole: extent, picture: extent, left: 0, top: 0 });
  for (const { target, place } of plan.targets) places.set(target.name, place);
  const halos = yield* haloSteps(
    source,
    treatment,
    engine,
    (image, x, y, found) => {
      const { whole, left, top } = places.get(image)!;
      let map = marks.get(image);
      if (map === undefined) {
        map = new Uint16Array(whole.width * whole.height);
        marks.set(image, map);
      }
      map[(y + top) * whole.width + x + left] = haloMark(found);
    },
    known,
  );
  const bytes = [...marks.values()].reduce((sum, map) => sum + map.byteLength, 0);
  return { halos, marks, bytes };
}

function imageOf(chain: Chain, image: PrintImage, use: ChainImage['use'] = 'image'): ChainImage {
  const found = chain.images.find(
    (each) =>
      each.use === use &&
      ('level' in image ? each.level === image.level : 'target' in image && each.target === image.target.name),
  );
  if (found === undefined) throw new RangeError(`Expected an image of the chain but received ${JSON.stringify(image)}`);
  return found;
}

function firstLevelOf(image: PrintImage): number {
  if ('level' in image) return image.level;
  return 'lod' in image ? Math.floor(Math.max(0, image.lod)) : 0;
}

function firstLevel({ plan: { treatment } }: Chain): number {
  return treatment.levels === 'none' ? 0 : treatment.levels.first;
}

function lastLevel(chain: Chain): number {
  return chain.images.reduce((last, image) => Math.max(last, image.level ?? 0), 0);
}

function statsOf(image: ChainImage): PrintStats {
  const { coverage, coverageScale, light, normalLength, clipped } = image;
  const all = [...clipped.below, ...clipped.above];
  return {
    coverage: coverage ?? null,
    coverageScale: coverageScale?.scale ?? null,
    luminance: light === undefined ? null : light.weight > 0 ? light.light / light.weight : 0,
    normalLength: normalLength ?? null,
    clipped: all.reduce((sum, count) => sum + count, 0),
  };
}

function rangeSize(ranges: readonly Range[]): number {
  return ranges.reduce((sum, { min, max }) => sum + min.codes.byteLength + max.codes.byteLength, 0);
}

function chainSize(chain: Chain): number {
  return chain.images.reduce((sum, { raster }) => {
    return sum + (raster.kind === 'indexed' ? raster.indices.byteLength : raster.codes.byteLength);
  }, 0);
}
