import { light } from '../../../core/figures.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { maxCode } from '../../../core/raster/raster.ts';
import { t } from '../words/t.ts';
import type { CardFigure } from './print-card.ts';

const means = new WeakMap<Picture, number>();

/** What is told of an output beside the image: its mean, 0..1 of the largest code. */
export function besideFigure(picture: Picture): CardFigure {
  let mean = means.get(picture);
  if (mean === undefined) {
    let sum = 0;
    for (const code of picture.codes) sum += code;
    mean = sum / picture.codes.length / maxCode(picture.depth);
    means.set(picture, mean);
  }
  return { name: t('mean'), text: light(mean), over: false };
}
