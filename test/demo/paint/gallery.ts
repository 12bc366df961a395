import type { IndexedRaster, StraightRaster } from '../../../core/raster/raster.ts';
import { paintAlderTwig } from './alder-twig.ts';
import { paintBogHeight } from './bog-height.ts';
import { paintBoilerPlate } from './boiler-plate.ts';
import { paintChainLink } from './chain-link.ts';
import { paintCobblesColor } from './cobbles-color.ts';
import { paintCobblesNormal } from './cobbles-normal.ts';
import { paintCobblesRoughness } from './cobbles-roughness.ts';
import { paintLantern } from './lantern.ts';
import { paintNewt } from './newt.ts';
import { paintNewtWalk } from './newt-walk.ts';
import { encodePng } from './png.ts';
import { encodeTga } from './tga.ts';

/** One texture of the demo. `path` is relative to test/demo. */
export type Piece =
  | { readonly kind: 'png'; readonly path: string; readonly paint: () => StraightRaster | IndexedRaster }
  | { readonly kind: 'tga'; readonly path: string; readonly paint: () => StraightRaster };

/** Every texture of the demo, and how it is painted. */
export const gallery: readonly Piece[] = [
  { kind: 'png', path: 'ground/cobbles.png', paint: paintCobblesColor },
  { kind: 'png', path: 'ground/cobbles_normal.png', paint: paintCobblesNormal },
  { kind: 'tga', path: 'ground/cobbles_rough.tga', paint: paintCobblesRoughness },
  { kind: 'png', path: 'foliage/alder-twig.png', paint: paintAlderTwig },
  { kind: 'tga', path: 'props/chain-link.tga', paint: paintChainLink },
  { kind: 'png', path: 'props/boiler-plate_orm.png', paint: paintBoilerPlate },
  { kind: 'png', path: 'terrain/bog.png', paint: paintBogHeight },
  { kind: 'png', path: 'sprites/wick.png', paint: paintNewt },
  { kind: 'png', path: 'sprites/wick-walk.png', paint: paintNewtWalk },
  { kind: 'png', path: 'ui/lantern.png', paint: paintLantern },
];

/** The file of a piece, painted anew. */
export function encodePiece(piece: Piece): Uint8Array {
  return piece.kind === 'png' ? encodePng(piece.paint()) : encodeTga(piece.paint());
}
