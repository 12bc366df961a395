import type { Manifest } from './manifest/manifest.ts';
import type { Cancel, Ports } from './port.ts';
import type { Extent } from './raster/raster.ts';
import type { Treatment } from './treatment/treatment.ts';

/** What a worker is asked to do: build one texture. Plain data, so it can be posted. */
export interface BuildJob {
  /** Root-relative, "/"-separated, NFC; also what problems name. */
  readonly texture: string;
  readonly image: JobSource;
  /** Asked for where the treatment names a roughness map. */
  readonly roughness?: JobSource;
  readonly treatment: Treatment;
  /** Bytes that building may hold; more is refused as `too-much-memory`. */
  readonly memoryBytes: number;
}

export interface JobSource {
  readonly bytes: Uint8Array;
  /** As the manifest writes it: relative to the manifest's folder, or to the root where `base` says so. */
  readonly reference: string;
}

/** One finished output file. `path` is relative to the output folder, "/"-separated. */
export interface BuiltFile {
  readonly path: string;
  readonly byteCount: number;
  /** Its bytes in order, to be taken once: a large file is never held whole. A piece is valid until the next is asked for. */
  readonly pieces: AsyncIterable<Uint8Array>;
}

/** Files of up to so many bytes may be joined by whoever takes them: the plan counts them whole. */
export const JOINED_BYTES = 2 ** 22;

/** What a treatment makes of an image, known from its header alone. */
export interface BuildPlan {
  /** In the order in which they are handed over. A level 0 is among them where its codes may differ from the source's; where
   *  they turn out the same, it is not written. */
  readonly files: readonly PlannedFile[];
  readonly phases: readonly ('rows' | 'level')[];
  /** Bytes that building holds at its worst, source file and outputs included. */
  readonly peakBytes: number;
  readonly notes: readonly string[];
}

export interface PlannedFile {
  readonly path: string;
  readonly use: 'image' | 'min' | 'max' | 'roughness' | 'container';
  readonly level?: number;
  readonly target?: string;
  readonly extent: Extent;
}

/** Builds one texture. Hands over each file once, in the manifest's order; the caller may write it at once to a
 *  temporary name, and goes on when it has taken what it wants of the pieces, all or none of them. Nothing is complete until the manifest is returned. Throws Refusal. */
export type BuildTexture = (
  job: BuildJob,
  ports: Ports,
  cancel: Cancel,
  write: (file: BuiltFile) => Promise<void>,
) => Promise<Manifest>;
