import type { Transfer } from '../color/transfer.ts';
import type { Wrap } from '../kernel/wrap.ts';
import type { Depth, Extent } from '../raster/raster.ts';

// The resolved form: every setting explicit, defaults filled in. What a user may leave out is in schema.ts.

export type Content = 'color' | 'normal' | 'height' | 'data';

/** What one channel group of a packed file means. `roughness` is data that takes up the spread of the same file's normals. */
export type ChannelContent = Content | 'roughness';

export type AlphaUse = 'opacity' | 'mask' | 'data' | 'none';

/** A kernel's name with every parameter it has, in the kernel table's order. */
export interface KernelChoice {
  readonly name: string;
  /** keys {a}, mitchell {b, c}, kaiser {alpha, width}, gaussian {sigma}, detail {lambda}; {} for the rest. */
  readonly params: Readonly<Record<string, number>>;
}

export interface AlphaTreatment {
  readonly use: AlphaUse;
  /** 0..1; a sample of a mask passes when its code compares so with cutoff * max. */
  readonly cutoff: number;
  readonly test: '>=' | '>';
  readonly keepCoverage: boolean;
  readonly store: 'straight' | 'premultiplied';
  /** Whether color is weighted by alpha while filtering (only asked where `use` is opacity or mask). */
  readonly weight: boolean;
}

export type Roughness =
  | null
  /** One perceptual roughness, 0..1, for the whole surface. */
  | { readonly constant: number }
  /** A map beside the normal map; `path` relative to the root, {path} and {name} filled in. */
  | { readonly path: string; readonly channel: 'r' | 'g' | 'b' | 'a' };

/** A size to build directly from level 0. */
export type Target =
  /** Scale factor per axis: extent = max(1, floor(s n + 1/2)). */
  | { readonly name: string; readonly scale: number }
  | { readonly name: string; readonly extent: readonly [width: number, height: number] }
  /** Scaled to fit, centered, the rest transparent. */
  | { readonly name: string; readonly cell: readonly [width: number, height: number] };

export interface Treatment {
  readonly content: Content;
  /** Channel letters of `r g b a`, grouped: `{ rg: 'normal', b: 'roughness', a: 'data' }`; null for an unpacked file. */
  readonly channels: Readonly<Record<string, ChannelContent>> | null;
  /** One for all channels, or one a channel; alpha used as opacity or mask is linear always. */
  readonly transfer: Transfer | readonly Transfer[];
  /** Light in which kernels weigh: `code` filters the codes as they are. */
  readonly light: 'linear' | 'code';
  readonly alpha: AlphaTreatment;
  readonly fill: 'none' | 'hidden' | 'all';
  readonly kernel: { readonly minify: KernelChoice; readonly magnify: KernelChoice };
  readonly derive: 'previous' | 'base';
  readonly wrap: { readonly x: Wrap; readonly y: Wrap };
  /** Levels that are shipped, counted from the source's level 0; `last: null` is the last there is. */
  readonly levels: { readonly first: number; readonly last: number | null } | 'none';
  readonly targets: readonly Target[];
  readonly grid: { readonly cell: readonly [width: number, height: number]; readonly gutter: number } | null;
  readonly depth: 'same' | Depth;
  readonly outputs: readonly ('png' | 'ktx2')[];
  /** Pattern of an output's path below the output folder, without its extension; null is the default naming. */
  readonly name: string | null;
  readonly ktx2: { readonly supercompress: 'none' | 'zlib'; readonly format: 'same' | 'wide' };
  readonly normal: {
    readonly count: 2 | 3;
    readonly y: 'up' | 'down';
    readonly base: 'keep' | 'renormalise';
    readonly roughness: Roughness;
  };
  readonly height: { readonly minmax: boolean };
  readonly png: { readonly base: boolean };
  readonly colorChunks: 'ignore' | 'obey';
  readonly view: {
    /** Texels of level 0 per meter of surface; null where nobody said. */
    readonly texelsPerMeter: number | null;
    /** Vertical field of view in degrees. */
    readonly fovY: number;
    /** Pixels. */
    readonly screenHeight: number;
    /** How backdrops blend. */
    readonly blend: 'linear' | 'code';
  };
  readonly limits: Limits;
}

/** A finding above its limit fails `check`; null is no limit. */
export interface Limits {
  /** Largest loss of coverage against level 0, as a share of level 0's coverage, 0..1. */
  readonly thinning: number | null;
  /** Worst overshoot in 8-bit codes, 0..255. */
  readonly halo: number | null;
  readonly overBudget: { readonly bytes: number; readonly format: string } | null;
}

/** How much a change may do before it fails `review`; null is no limit. No part of the treatment: they say nothing of a build, and
 *  no manifest holds them. */
export interface ReviewLimits {
  /** Largest loss of coverage at any size, as a share of what it was before, 0..1. */
  readonly coverageLoss: number | null;
  /** Largest change of mean luminance at any size, as a share of what it was before. */
  readonly lightChange: number | null;
  /** Largest loss of texels, as a share of those before, 0..1. */
  readonly texelLoss: number | null;
  /** Largest growth of the file, as a share of its bytes before. */
  readonly fileGrowth: number | null;
  /** Bytes that the levels may grow by on the GPU. */
  readonly memoryGrowth: number | null;
  /** Whether any harm that a review finds fails it. */
  readonly harm: 'report' | 'fail';
}

/** Which settings rule set a leaf. `rule` is `defaults`, `treatments[2]`, or `built-in`. */
export interface Origin {
  /** Dotted path of the leaf: `alpha.cutoff`. */
  readonly key: string;
  readonly value: unknown;
  readonly rule: string;
  /** Path of the settings file, and the place of the value in it, from 1; absent for built-in values. */
  readonly path?: string;
  readonly line?: number;
  readonly column?: number;
}

/** A texture of a root, with what applies to it. */
export interface Texture {
  /** Root-relative, "/"-separated, NFC. */
  readonly path: string;
  readonly treatment: Treatment;
  readonly review: ReviewLimits;
  readonly origins: readonly Origin[];
}

export type { Extent };
