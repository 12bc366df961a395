import type { Transfer } from '../color/transfer.ts';
import type { ChannelCount, Depth } from '../raster/raster.ts';
import type { NormalGroup } from './engine.ts';

/** How float rows of a layout become stored codes. Nothing is clamped before this. */
export interface Encoding {
  readonly layout: Layout;
  readonly floatChannels: number;
  readonly depth: Depth;
  readonly store: 'straight' | 'premultiplied';
  /** How color is stored: transfer-coded, or as linear light in code units. */
  readonly light: 'coded' | 'linear';
}

/** What one channel of the source holds and how its kernel light is reached. */
export type Role =
  /** Light; `transfer` is the one that filtering undoes, `stored` the one that codes stand for. They differ where codes are
   *  filtered as they are. */
  | { readonly kind: 'color'; readonly transfer: Transfer; readonly stored: Transfer }
  /** Numbers that are filtered as they are. */
  | { readonly kind: 'plain' }
  /** Alpha used as opacity or mask. */
  | { readonly kind: 'opacity' }
  /** Alpha that nobody reads: stored as its largest code. */
  | { readonly kind: 'unused' }
  | { readonly kind: 'normal' }
  | { readonly kind: 'roughness' };

/** The channels of a source in the light of its treatment. */
export interface Layout {
  readonly channels: ChannelCount;
  readonly depth: Depth;
  readonly roles: readonly Role[];
  /** Index of the channel whose role is `opacity`. */
  readonly alpha: number | null;
  /** Channels multiplied by alpha while filtering. */
  readonly weighted: readonly number[];
  readonly normals: readonly NormalGroup[];
  /** As in the head; null where colors are what their roles say. */
  readonly gamma: number | null;
  /** Index of the roughness channel that takes up the spread of this file's normals. */
  readonly roughness: number | null;
}
