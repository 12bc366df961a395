import type { SourceHeader } from '../codec/source.ts';
import type { ImageUse } from '../manifest/manifest.ts';
import type { Problem } from '../problem.ts';
import type { ChannelCount, Codes, Depth, Extent } from '../raster/raster.ts';
import type { Target, Treatment } from '../treatment/treatment.ts';

// What a proof asks of the engine, and what it is told. All of it is plain data, so it can be posted to a worker.

/** Which rendition of the source is meant. */
export type PrintImage =
  | { readonly level: number }
  | { readonly target: Target }
  /** What a trilinear sampler shows between two levels: level of detail 0 or more, at an extent of screen pixels. */
  | { readonly lod: number; readonly extent: Extent };

/** What a build writes beside an image: bounds of its heights, of levels from 1 on, and the roughness that takes up what its
 *  normals lose. */
export type SideOutput = Exclude<ImageUse, 'image'>;

export type Want =
  /** The codes of one image, as the build stores them. */
  | {
      readonly kind: 'print';
      readonly treatment: Treatment;
      readonly image: PrintImage;
      /** Left out for the image itself. */
      readonly output?: SideOutput;
    }
  /** The pixel hash of one image. Asked for apart: it may take as long as the print, which nobody should wait for. */
  | {
      readonly kind: 'pixels';
      readonly treatment: Treatment;
      readonly image: PrintImage;
      readonly output?: SideOutput;
    }
  /** What was measured on every level, with a small cut of each. */
  | { readonly kind: 'levels'; readonly treatment: Treatment }
  /** Overshoot of one image before clamping. */
  | { readonly kind: 'halo'; readonly treatment: Treatment; readonly image: PrintImage }
  /** What of pixel art an image loses: colors of the palette, and even pixels. */
  | { readonly kind: 'art'; readonly treatment: Treatment; readonly image: PrintImage }
  /** Source texels that make one texel of an image. */
  | {
      readonly kind: 'footprint';
      readonly treatment: Treatment;
      readonly image: PrintImage;
      readonly x: number;
      readonly y: number;
    }
  /** Codes of the source along a line, in shares of its width and height. */
  | { readonly kind: 'section'; readonly from: readonly [number, number]; readonly to: readonly [number, number] };

export type WantKind = Want['kind'];

export interface Answers {
  readonly print: Print;
  readonly pixels: PixelsAnswer;
  readonly levels: LevelsAnswer;
  readonly halo: HaloAnswer;
  readonly art: ArtAnswer;
  readonly footprint: FootprintAnswer;
  readonly section: SectionAnswer;
}

export type Answer = Answers[WantKind];

/** What the channels of a print stand for, as far as showing them needs to know. */
export interface Meaning {
  /** Whether codes of the front channels are sRGB-coded light. */
  readonly transfer: 'srgb' | 'linear';
  /** Whether the front channels hold light that is looked at, rather than numbers. */
  readonly color: boolean;
  /** Index of the alpha that is opacity or mask; null where there is none. */
  readonly alpha: number | null;
  readonly premultiplied: boolean;
  /** Channels of a normal's x and y, and of z unless it is rebuilt; null where there is none. */
  readonly normal: { readonly x: number; readonly y: number; readonly z: number | null } | null;
}

/** A raster of straight or premultiplied codes with its meaning; palettes are expanded. */
export interface Picture {
  readonly extent: Extent;
  readonly channels: ChannelCount;
  readonly depth: Depth;
  readonly codes: Codes;
  readonly meaning: Meaning;
}

export interface PrintStats {
  /** Share of samples that pass the cutoff; null where alpha is no mask. */
  readonly coverage: number | null;
  /** Scale of alpha that kept coverage; null where it was not asked for. */
  readonly coverageScale: number | null;
  /** Alpha-weighted mean of linear luminance, 0..1; null where there is no light. */
  readonly luminance: number | null;
  /** Mean length of the mean normals, 0..1; null where there are none. */
  readonly normalLength: number | null;
  /** Samples that were clipped, all channels together. */
  readonly clipped: number;
}

export interface Print {
  readonly kind: 'print';
  readonly picture: Picture;
  readonly stats: PrintStats;
}

export interface PixelsAnswer {
  readonly kind: 'pixels';
  /** The pixel hash, as manifests hold it; empty between levels. */
  readonly pixels: string;
}

export interface LevelsAnswer {
  readonly kind: 'levels';
  readonly levels: readonly {
    readonly level: number;
    readonly extent: Extent;
    readonly stats: PrintStats;
    /** The level, or the middle of it, at most `CUT_SIDE` texels a side. */
    readonly cut: Picture;
  }[];
  /** Overshoot by level, in 8-bit codes; a level that overshoots nowhere by its kernel's nature is missing. */
  readonly halo: readonly { readonly level: number; readonly worst: number; readonly x: number; readonly y: number }[];
}

export interface HaloAnswer {
  readonly kind: 'halo';
  /** Null for kernels that cannot overshoot. */
  readonly halo: {
    /** Largest overshoot in 8-bit codes, and its texel. */
    readonly worst: number;
    readonly x: number;
    readonly y: number;
    /** Shares of visible texels. */
    readonly share: number;
    readonly clipped: number;
  } | null;
  /** A mark a texel, as `haloMark` makes it; null where nothing overshoots. */
  readonly marks: Uint16Array | null;
}

export interface ArtAnswer {
  readonly kind: 'art';
  /** Null where the source has no palette and not few colors, or codes cannot be compared. */
  readonly off: OffPalette | null;
  /** Null where the kernel does not move codes. */
  readonly even: Evenness | null;
}

export interface OffPalette {
  /** How many colors the source has. */
  readonly palette: number;
  /** Share of visible texels whose color is none of them. */
  readonly share: number;
  /** How many other colors there are. */
  readonly colors: number;
  /** 1 for each such texel. */
  readonly marks: Uint8Array;
}

export interface Evenness {
  readonly x: AxisEvenness;
  readonly y: AxisEvenness;
  /** The nearest scales 1/n below 1 at which every n-th column and row of the source stands, and none else: that of the next
   *  smaller image, null where there is none, and of the next larger. Null for images that leave nothing out. */
  readonly parts: { readonly smaller: number | null; readonly larger: number } | null;
}

/** How often the texels of a source stand along one axis of an image. */
export interface AxisEvenness {
  /** Texels of the image that the narrowest and the widest one takes. */
  readonly least: number;
  readonly most: number;
  /** How many are left out. */
  readonly left: number;
  /** Texels of the image, from the first, that are of a wider one than others, or stand behind a wider gap than others. */
  readonly uneven: readonly number[];
}

/** Source texels along one axis with their weights, which sum to 1. */
export interface AxisFootprint {
  readonly texels: readonly number[];
  readonly weights: readonly number[];
}

export interface FootprintAnswer {
  readonly kind: 'footprint';
  /** Null where the kernel has no weights that are known without the codes. */
  readonly axes: { readonly x: AxisFootprint; readonly y: AxisFootprint } | null;
}

export interface SectionAnswer {
  readonly kind: 'section';
  readonly channels: ChannelCount;
  readonly depth: Depth;
  /** Interleaved codes, evenly spaced along the line. */
  readonly codes: Codes;
}

/** Longest side of a cut, in texels. */
export const CUT_SIDE = 128;

/** Overshoot by more than half an 8-bit code above or below the source's range around it; clamping changed a channel. Above
 *  them stand four bits for the channels that are above, and four for those below. */
export const HALO_ABOVE = 1;
export const HALO_BELOW = 2;
export const HALO_CLIPPED = 4;
const ABOVE_SHIFT = 4;
const BELOW_SHIFT = 8;

/** `above` and `below` hold a bit for each channel. */
export function haloMark(found: { readonly above: number; readonly below: number; readonly clips: boolean }): number {
  const { above, below, clips } = found;
  const sides = (above > 0 ? HALO_ABOVE : 0) | (below > 0 ? HALO_BELOW : 0) | (clips ? HALO_CLIPPED : 0);
  return sides | (above << ABOVE_SHIFT) | (below << BELOW_SHIFT);
}

/** Which way a channel overshoots by its texel's mark: 1 above, -1 below, 0 not. */
export function haloSide(mark: number, channel: number): 1 | 0 | -1 {
  if (((mark >> (ABOVE_SHIFT + channel)) & 1) !== 0) return 1;
  return ((mark >> (BELOW_SHIFT + channel)) & 1) !== 0 ? -1 : 0;
}

/** To the worker. Wants replace the ones before them: newest wins. */
export type ToBench =
  | {
      readonly kind: 'open';
      readonly revision: number;
      readonly name: string;
      readonly bytes: ArrayBuffer;
      /** The roughness map that the treatment names; null where it names none. */
      readonly roughness: ArrayBuffer | null;
    }
  | {
      readonly kind: 'want';
      readonly revision: number;
      readonly wants: readonly { readonly key: string; readonly want: Want }[];
    };

/** From the worker. */
export type FromBench =
  | {
      readonly kind: 'opened';
      readonly revision: number;
      readonly header: SourceHeader;
      /** Why the plain engine makes the prints; null where the SIMD engine does. */
      readonly slow: Problem | null;
    }
  | { readonly kind: 'answer'; readonly revision: number; readonly key: string; readonly answer: Answer }
  /** `key` is null where the file itself cannot be read. */
  | { readonly kind: 'problem'; readonly revision: number; readonly key: string | null; readonly problem: Problem };
