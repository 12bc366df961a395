import type { Taps } from '../kernel/taps.ts';
import type { Codes, Depth, Extent } from '../raster/raster.ts';
import type { Wrap } from '../treatment/treatment.ts';

// The rows phase: source rows go in once, finished rows of every level and target come out. One interface for every
// engine; an engine is right when its float rows equal those of plain.ts bit for bit.

/** How a row of codes becomes floats. Channels stay interleaved and in order. */
export interface Decoding {
  readonly depth: Depth;
  readonly channels: number;
  /** One value per code and channel; channels may share a table. */
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
  readonly steps: readonly Step[];
}

/** Receives float rows: node, row from the top, floats (valid during the call only). Rows of a node may come in cyclic
 *  order, starting anywhere. */
export type RowSink = (node: number, y: number, floats: Float32Array) => void;

export interface RowsRun {
  /** Rows of the source from the top, each once. */
  push(codes: Codes): void;
}

export interface Engine {
  readonly name: string;
  /** Bytes that a pass holds, known before it is opened. */
  passBytes(pass: Pass): number;
  open(pass: Pass, sink: RowSink): RowsRun;
}
