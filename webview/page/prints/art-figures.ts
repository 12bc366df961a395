import { percent } from '../../../core/figures.ts';
import type { ArtAnswer, AxisEvenness } from '../../../core/proof/want.ts';
import { t } from '../words/t.ts';
import type { CardFigure } from './print-card.ts';

/** What of pixel art a print loses, in numbers; nothing where there is nothing to lose. */
export function artFigures(art: ArtAnswer | null): readonly CardFigure[] {
  if (art === null) return [];
  const figures: CardFigure[] = [];
  const add = (name: string, text: string): void => void figures.push({ name, text, over: false });
  if (art.off !== null) {
    const { share, colors, palette } = art.off;
    add(
      t('off palette'),
      share === 0
        ? t('none')
        : t('{share}, {colors} colors beside {palette}', { share: percent(share), colors, palette }),
    );
  }
  if (art.even !== null) {
    const [x, y] = [axisWords(art.even.x), axisWords(art.even.y)];
    if (x !== null) add(x === y ? t('columns and rows') : t('columns'), x);
    if (y !== null && y !== x) add(t('rows'), y);
    const { parts } = art.even;
    if (parts !== null && (x !== null || y !== null)) {
      add(
        t('even at'),
        parts.smaller === null
          ? scaleText(parts.larger)
          : t('{smaller} and {larger}', { smaller: scaleText(parts.smaller), larger: scaleText(parts.larger) }),
      );
    }
  }
  return figures;
}

/** The scale 1/n, as the field of sizes takes it. */
function scaleText(part: number): string {
  return part === 1 ? '1x' : `1/${part}x`;
}

/** Null where all are alike. */
function axisWords({ least, most, left, uneven }: AxisEvenness): string | null {
  if (uneven.length === 0) return null;
  if (least > 0) return t('{least} or {most} texels wide, even at {least}x and {most}x', { least, most });
  return left === 1 ? t('1 left out') : t('{count} left out', { count: left });
}
