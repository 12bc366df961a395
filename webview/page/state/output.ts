import type { PrintImage, SideOutput } from '../../../core/proof/want.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { t } from '../words/t.ts';

/** What of a build's outputs the prints show. */
export type Output = 'image' | SideOutput;

/** The outputs that a build writes of an image, the image itself first. */
export function outputsOf(treatment: Treatment, image: PrintImage): readonly Output[] {
  const rough = treatment.normal.roughness !== null && treatment.grid === null ? (['roughness'] as const) : [];
  // Level 0 is its own bounds, and targets have none.
  const bound = treatment.height.minmax && 'level' in image && image.level > 0 ? (['min', 'max'] as const) : [];
  return ['image', ...rough, ...bound];
}

export function outputName(output: Output, { content }: Treatment): string {
  switch (output) {
    case 'image':
      return content === 'normal' ? t('normals') : content === 'height' ? t('heights') : t('image');
    case 'min':
      return t('least heights');
    case 'max':
      return t('greatest heights');
    case 'roughness':
      return t('roughness');
  }
}
