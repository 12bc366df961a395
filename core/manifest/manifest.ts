import type { Treatment } from '../treatment/treatment.ts';

/** The manifest's format; a reader refuses a larger one. */
export const MANIFEST_FORMAT = 1;

/** Raised when any stored code, for any input and setting, changes. */
export const ALGORITHM = 1;

/** `<name>.mips.json`: how one texture was built. Holds no time, host or absolute path. */
export interface Manifest {
  readonly format: number;
  readonly algorithm: number;
  /** SHA-256 over the deflated sample: which zlib wrote the compressed files. */
  readonly encoder: string;
  /** `root` where source paths are relative to the root for want of a relative path; left out otherwise. */
  readonly base?: 'root';
  readonly sources: readonly ManifestSource[];
  /** Every resolved setting, none implied. */
  readonly settings: Treatment;
  readonly levels: readonly ManifestImage[];
  readonly targets: readonly ManifestImage[];
  /** Files that hold several images: KTX2. */
  readonly containers: readonly ManifestFile[];
  /** What the build had to say: why levels stop, that level 0 was changed, ... */
  readonly notes: readonly string[];
}

export interface ManifestSource {
  /** Relative to the manifest's folder, "/"-separated. */
  readonly path: string;
  readonly use: 'image' | 'roughness';
  readonly sha256: string;
  readonly pixels: string;
  readonly extent: readonly [number, number];
  readonly depth: number;
  readonly channels: number;
  /** `sRGB 0`, `gAMA 45455`, ...: found in the file; `settings.colorChunks` says what was done about them. */
  readonly colorChunks: readonly string[];
}

export interface ManifestFile {
  /** Relative to the manifest's folder. */
  readonly path: string;
  readonly sha256: string;
}

/** `min` and `max` bound a height, `roughness` takes up the spread of normals, `image` is everything else. */
export type ImageUse = 'image' | 'min' | 'max' | 'roughness';

/** One level or target, in one use. */
export interface ManifestImage {
  readonly use: ImageUse;
  /** For levels: counted from the source's level 0. */
  readonly level?: number;
  /** For targets: its name. */
  readonly target?: string;
  readonly extent: readonly [number, number];
  /** SHA-256 of width, height, channels, depth (u32 LE), then the stored rows, 16 bit little-endian. */
  readonly pixels: string;
  /** The PNG that holds it alone; none for a level that only a container holds. */
  readonly file?: ManifestFile;
  /** Share of samples that pass the alpha test, 6 significant digits; masks only. */
  readonly coverage?: number;
  /** Scale that alpha was multiplied by to keep coverage, and how well it could. */
  readonly coverageScale?: { readonly scale: number; readonly residual: number; readonly tie: boolean };
  /** Alpha-weighted mean relative luminance, 0..1; color only. */
  readonly luminance?: number;
  /** Mean length of the un-normalised normals, 0..1; normals only. */
  readonly normalLength?: number;
  /** Samples that clamping changed, per channel; left out where none was. */
  readonly clipped?: { readonly below: readonly number[]; readonly above: readonly number[] };
}
