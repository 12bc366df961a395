import type { Origin, Treatment } from '../treatment/treatment.ts';

/** A proof that is to be exported: what both the sheet and the page are made from. */
export interface ProofOrder {
  /** File name; its extension tells the format. */
  readonly name: string;
  /** Relative to the root, "/"-separated. */
  readonly path: string;
  /** The source file. */
  readonly image: Uint8Array;
  /** The roughness map that the treatment names; null where it names none. */
  readonly roughness: Uint8Array | null;
  readonly settings: {
    /** Name of the settings file; null where the built-in defaults apply. */
    readonly file: string | null;
    /** Globs of the last treatment that matches; null where none does. */
    readonly globs: readonly string[] | null;
    readonly treatment: Treatment;
    readonly origins: readonly Origin[];
  };
  /** What a page of this texture keeps: prints, sight, view. Null is a page at its start. Not trusted. */
  readonly state: unknown;
  readonly preferences: ProofPreferences;
  /** What a reader must know of what was left out; null where nothing was. */
  readonly remark: string | null;
}

/** How a proof is looked at, where neither settings nor page say. */
export interface ProofPreferences {
  readonly backdrop: 'checker' | 'black' | 'white' | 'gray';
  /** Vertical field of view in degrees. */
  readonly fovY: number;
  /** Pixels. */
  readonly screenHeight: number;
  /** Least milliseconds between two swaps, 333 or more. */
  readonly swapDwell: number;
}

/** Preferences of a door without any. */
export const startPreferences: ProofPreferences = { backdrop: 'checker', fovY: 60, screenHeight: 1080, swapDwell: 333 };

/** Bytes of source above which a page asks what to keep: 50 MB, so that it can still be sent about. */
export const SOURCE_LIMIT = 50_000_000;
