import type { Wrap } from '../../core/kernel/wrap.ts';
import type { Extent } from '../../core/raster/raster.ts';

/** Everything that is measured, as data. */
export interface Cases {
  /** Sides of square images whose chains are timed, the runs of each that count, and the slow peers that are left out. */
  readonly chains: readonly { readonly side: number; readonly rounds: number; readonly without: readonly string[] }[];
  /** Side and rounds of the chains of each character. */
  readonly characters: { readonly side: number; readonly rounds: number };
  /** What is held against the chain of a power of two, in time a tap. */
  readonly phases: { readonly side: number; readonly rounds: number; readonly cases: readonly PhaseCase[] };
  /** Sides of PNG files that are built whole, and rounds. */
  readonly builds: { readonly sides: readonly number[]; readonly rounds: number };
  /** How many textures of each side the mixed folder has, and rounds. */
  readonly folder: { readonly counts: readonly (readonly [side: number, count: number])[]; readonly rounds: number };
  /** Textures of a large project, their side, and rounds. */
  readonly project: { readonly count: number; readonly side: number; readonly rounds: number };
  /** Textures that one commit changes, their side, rounds of listing them, and how many of these compare them, too. */
  readonly review: {
    readonly count: number;
    readonly side: number;
    readonly rounds: number;
    readonly wholeRounds: number;
  };
  /** Side of the image whose memory is measured. */
  readonly memory: { readonly side: number };
  /** Side of the images that are held against double precision. */
  readonly accuracy: { readonly side: number };
  /** Side of the first chain of a new process, and how many processes. */
  readonly cold: { readonly side: number; readonly rounds: number };
  /** Side of the texture that a page opens, and rounds. */
  readonly page: { readonly side: number; readonly rounds: number };
}

export interface PhaseCase {
  readonly name: string;
  readonly from: Extent;
  /** Null makes the chain. */
  readonly to: Extent | null;
  readonly kernel: string;
  readonly wrap: Wrap;
}

/** Odd, smaller and larger, even steps and awkward ones: every phase differs, or nearly. */
const phaseCases = (side: number): readonly PhaseCase[] => {
  const square = (width: number): Extent => ({ width, height: width });
  const odd = square(side - 1);
  const clamp = { to: null, wrap: 'clamp-to-edge' } as const;
  return [
    { ...clamp, name: 'odd chain', from: odd, kernel: 'lanczos3' },
    { ...clamp, name: 'odd chain', from: odd, kernel: 'mitchell' },
    { ...clamp, name: 'odd chain', from: odd, kernel: 'box' },
    { ...clamp, name: 'odd chain, repeat', from: odd, kernel: 'lanczos3', wrap: 'repeat' },
    { ...clamp, name: 'to 5/8', from: square(side), to: square((side * 5) >> 3), kernel: 'lanczos3' },
    { ...clamp, name: 'to a third', from: square(side), to: square(Math.floor(side / 3)), kernel: 'even' },
    { ...clamp, name: 'to 3/2', from: square(side >> 1), to: square((side * 3) >> 2), kernel: 'lanczos3' },
  ];
};

export const fullCases: Cases = {
  chains: [
    { side: 1024, rounds: 15, without: [] },
    { side: 4096, rounds: 5, without: ['jimp'] },
  ],
  characters: { side: 1024, rounds: 7 },
  phases: { side: 2048, rounds: 7, cases: phaseCases(2048) },
  builds: { sides: [1024, 4096], rounds: 5 },
  folder: {
    // A thousand, most of them small; half of all texels are those of the two largest sizes.
    counts: [
      [64, 400],
      [128, 300],
      [256, 180],
      [512, 90],
      [1024, 24],
      [2048, 6],
    ],
    rounds: 2,
  },
  project: { count: 10_000, side: 32, rounds: 5 },
  review: { count: 2000, side: 128, rounds: 3, wholeRounds: 1 },
  memory: { side: 4096 },
  accuracy: { side: 1024 },
  cold: { side: 1024, rounds: 11 },
  page: { side: 2048, rounds: 5 },
};

/** Each once and small: what CI runs to see that all of it still runs. */
export const smokeCases: Cases = {
  chains: [{ side: 64, rounds: 1, without: [] }],
  characters: { side: 32, rounds: 1 },
  phases: { side: 64, rounds: 1, cases: phaseCases(64) },
  builds: { sides: [64], rounds: 1 },
  folder: {
    counts: [
      [16, 3],
      [32, 2],
    ],
    rounds: 1,
  },
  project: { count: 6, side: 8, rounds: 1 },
  review: { count: 4, side: 16, rounds: 1, wholeRounds: 1 },
  memory: { side: 64 },
  accuracy: { side: 32 },
  cold: { side: 64, rounds: 1 },
  page: { side: 256, rounds: 1 },
};
