import type { Taps } from '../kernel/taps.ts';
import type { Wrap } from '../kernel/wrap.ts';
import type { Codes, Depth, Extent } from '../raster/raster.ts';
import type { Clipped } from './clip.ts';
import type { Encoding } from './encoding.ts';

// The rows phase: source rows go in once, finished rows of every level and target come out. One interface for every
// engine; an engine is right when its float rows equal those of plain.ts bit for bit.

/** How a row of codes becomes floats. Channels stay interleaved and in order. */
export interface Decoding {
  readonly depth: Depth;
  readonly channels: number;
  /** One value per code and channel; channels may share a table. They are read when a pass is opened. */
  readonly tables: readonly Float32Array[];
  /** Channels multiplied by `alpha` after the table; none where `alpha` is null. */
  readonly weighted: readonly number[];
  readonly alpha: number | null;
  /** Channel triples (or pairs, z rebuilt into a new last channel) that are normalised after the table. */
  readonly normals: readonly NormalGroup[];
}

export interface NormalGroup {
  readonly x: number;
  readonly y: number;
  /** The channel of z in the float row; for a two-channel normal it is an added channel behind the source's. */
  readonly z: number;
  /** Whether z is rebuilt from x and y. */
  readonly rebuilt: boolean;
}

/** One resample of the pass: from the source (node 0) or an earlier node. */
export interface Step {
  /** 0 is the source; step i makes node i + 1. */
  readonly from: number;
  readonly extent: Extent;
  readonly x: Taps;
  readonly y: Taps;
}

export interface Pass {
  readonly extent: Extent;
  readonly wrap: { readonly x: Wrap; readonly y: Wrap };
  readonly decoding: Decoding;
  /** How rows will be stored, where they are: an engine may have a coder of its own for it. */
  readonly encoding?: Encoding;
  readonly steps: readonly Step[];
}

/** Receives float rows: node, row from the top, floats (valid during the call only). Rows of a node may come in cyclic
 *  order, starting anywhere. */
export type RowSink = (node: number, y: number, floats: Float32Array) => void;

/** What is done with finished rows. `floats` is always a row of the run that the coder belongs to, as its sink has it. */
export interface RowCoder {
  /** Stores the row in `codes` from sample `offset` on and counts what clamping changed. `lengths` are the mean lengths of the
   *  normals over each texel, where there are any. */
  encode(floats: Float32Array, codes: Codes, offset: number, clipped: Clipped, lengths: Float32Array | null): void;
  /** Writes what `lightOf` asks of the row that `encode` has just stored there: SUMS_A_ROW numbers to `sums` from `at` on. */
  measure(floats: Float32Array, codes: Codes, offset: number, sums: Float64Array, at: number): void;
  /** Alpha clamped to 0..1, 65535 is 1. */
  keepAlpha(floats: Float32Array, values: Uint16Array): void;
  /** Mean length of the normals over each texel, alpha taken out where it weighs them. */
  measureLengths(floats: Float32Array, lengths: Float32Array): void;
}

export interface RowsRun {
  /** The engine's own coder for the pass's encoding; null where the plain one is to be used. */
  readonly coder: RowCoder | null;
  /** Rows of the source from the top, each once. */
  push(codes: Codes): void;
  /** The same of a source that is floats already: `floatChannels` a texel. */
  pushFloats(floats: Float32Array): void;
  /** Sums of each float channel of the source over the rows so far: four texels in float32, (a + b) + (c + d), fours of a row
   *  in double precision from the left, then rows from the top. */
  sums(): Float64Array;
}

export interface Engine {
  readonly name: string;
  /** Bytes that a pass holds, known before it is opened. */
  passBytes(pass: Pass): number;
  open(pass: Pass, sink: RowSink): RowsRun;
}
