import { bSpline, catmullRom, hermite, keys, mitchell } from './cubic.ts';
import { gaussian } from './gaussian.ts';
import { kaiser, lanczos2, lanczos3, lanczos4 } from './sinc.ts';

/** A named weighting function of distance, or another rule that makes target texels from source texels. */
export type Kernel = KernelEntry & KernelRule;

export interface KernelEntry {
  readonly name: string;
  readonly params: readonly KernelParam[];
  /** Keys into core/REFERENCES.md, separated by ", ". */
  readonly source: string;
  /** Whether a target texel that lies centered on a source texel, when magnifying, equals it (for the default parameters). */
  readonly interpolates: boolean;
  readonly minifies: boolean;
  readonly magnifies: boolean;
}

export interface KernelParam {
  readonly name: string;
  /** `texels` are target texels when minifying and source texels when magnifying; `number` has no unit. */
  readonly unit: 'number' | 'texels';
  readonly min: number;
  readonly max: number;
  readonly default: number;
  /** The only values there are, where a range is not enough. */
  readonly allowed?: readonly number[];
}

/** One value for each of the kernel's parameters, by name. */
export type KernelParams = Readonly<Record<string, number>>;

export type KernelRule =
  /** Linear and separable at any ratio. */
  | {
      readonly kind: 'weights';
      /** Half-width in texels: the weight is 0 for |x| >= support. */
      support(params: KernelParams): number;
      /** Weight at distance x in texels; even in x; not normalised. */
      weight(x: number, params: KernelParams): number;
    }
  /** Weights are exact overlaps of texel areas. `magnified` says what happens where targets are the smaller ones. */
  | { readonly kind: 'area'; readonly magnified: 'overlap' | 'nearest' }
  /** Moves codes of single texels. */
  | { readonly kind: 'point' }
  /** Separable but not linear: a cubic through the samples with limited tangents; x, then y. */
  | { readonly kind: 'slopes' }
  /** Makes one texel from all the source codes it covers. */
  | { readonly kind: 'footprint' }
  /** Pixel-art scaler for fixed factors and their products. */
  | { readonly kind: 'scaler'; readonly factors: readonly number[] };

const everyScale = { minifies: true, magnifies: true } as const;

/** The source texel that holds the target's center: floor(u).  [Vulkan, (u,v,w,a) to (i,j,k,l,n) Transformation] */
const nearest: Kernel = {
  name: 'nearest',
  params: [],
  source: 'Vulkan',
  interpolates: true,
  ...everyScale,
  kind: 'point',
};

/** Average over the exact area of the target texel; for odd sizes the polyphase box.  [GutheHeckbert05] */
const box: Kernel = {
  name: 'box',
  params: [],
  source: 'GutheHeckbert05',
  interpolates: true,
  ...everyScale,
  kind: 'area',
  magnified: 'nearest',
};

/** Exact area at every scale: a magnified pixel keeps its width at scales that are no whole number, its borders blend. */
const even: Kernel = { ...box, name: 'even', magnified: 'overlap' };

/** Tent, 1 - |x|. Support 1 texel. Magnifying, it is bilinear filtering.  [Vulkan, Texel Filtering] */
const triangle: Kernel = {
  name: 'triangle',
  params: [],
  source: 'Vulkan',
  interpolates: true,
  ...everyScale,
  kind: 'weights',
  support: () => 1,
  weight: (x) => Math.max(0, 1 - Math.abs(x)),
};

/** Cubic with harmonic-mean tangents that never overshoots its samples.  [FritschButland84; FritschCarlson80] */
const monotone: Kernel = {
  name: 'monotone',
  params: [],
  source: 'FritschButland84, FritschCarlson80',
  interpolates: true,
  minifies: false,
  magnifies: true,
  kind: 'slopes',
};

/** Averages in which texels that differ from their surroundings weigh more.  [Weber16] */
const detail: Kernel = {
  name: 'detail',
  params: [{ name: 'lambda', unit: 'number', min: 0, max: 2, default: 0.5, allowed: [0, 0.5, 1, 2] }],
  source: 'Weber16',
  interpolates: false,
  minifies: true,
  magnifies: false,
  kind: 'footprint',
};

/** The color that covers most of the target texel: adds none to a palette. Our own rule, a plain area-weighted mode. */
const majority: Kernel = {
  name: 'majority',
  params: [],
  source: 'Own',
  interpolates: false,
  minifies: true,
  magnifies: false,
  kind: 'footprint',
};

/** Pixel-art scaler: 2x by EPX, which equals Scale2x, and 3x by Scale3x.  [MacTech99; Mazzoleni01] */
const epx: Kernel = {
  name: 'epx',
  params: [],
  source: 'MacTech99, Mazzoleni01',
  interpolates: true,
  minifies: false,
  magnifies: true,
  kind: 'scaler',
  factors: [2, 3],
};

/** Every kernel there is. One entry here adds one. */
export const kernels: readonly Kernel[] = [
  nearest,
  box,
  even,
  triangle,
  hermite,
  catmullRom,
  keys,
  mitchell,
  bSpline,
  lanczos2,
  lanczos3,
  lanczos4,
  kaiser,
  gaussian,
  monotone,
  detail,
  majority,
  epx,
];

export function findKernel(name: string): Kernel | undefined {
  return kernels.find((kernel) => kernel.name === name);
}

/** Every parameter of the kernel at its default. */
export function defaultParams(kernel: Kernel): KernelParams {
  return Object.fromEntries(kernel.params.map((param) => [param.name, param.default]));
}

/** Whether a parameter may take this value. */
export function allows(param: KernelParam, value: number): boolean {
  return value >= param.min && value <= param.max && (param.allowed?.includes(value) ?? true);
}
