import { HALO_ABOVE, type Picture } from '../../../core/proof/want.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import { HIDDEN_MARK, MARK_SCALE } from '../../../core/review/want.ts';
import { DIFFERENCE_RAMP, rampAt } from '../prints/backdrop.ts';
import { OKLAB_SCALE } from '../prints/view.ts';

/** Where two versions differ, as a picture in the colors of every difference, and the texels that differ where nobody sees it,
 *  which are hatched. */
export interface DifferencePicture {
  readonly picture: Picture;
  /** A number a texel, as overlays take marks; null where there is none. */
  readonly hidden: Uint16Array | null;
}

/** The picture of the marks that core made: a byte a texel. */
export function differencePicture(marks: Uint8Array, extent: Extent): DifferencePicture {
  const codes = new Uint8Array(marks.length * 3);
  const hidden = new Uint16Array(marks.length);
  let isHidden = false;
  for (let texel = 0; texel < marks.length; texel++) {
    const mark = marks[texel];
    if (mark === HIDDEN_MARK) {
      hidden[texel] = HALO_ABOVE;
      isHidden = true;
    }
    codes.set(COLORS[mark === HIDDEN_MARK ? 0 : mark], texel * 3);
  }
  const meaning = { transfer: 'srgb', color: true, alpha: null, premultiplied: false, normal: null } as const;
  return { picture: { extent, channels: 3, depth: 8, codes, meaning }, hidden: isHidden ? hidden : null };
}

const COLORS = Array.from({ length: 256 }, (_, mark) => rampAt(DIFFERENCE_RAMP, mark / MARK_SCALE / OKLAB_SCALE));
