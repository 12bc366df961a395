import type { Harm, HarmName } from './impact.ts';
import { percent } from './verdict.ts';
import { sayImage } from './visible.ts';

/** One English sentence a harm; `{share}` and `{image}` are filled in. */
export const harmWords: Readonly<Record<HarmName, string>> = {
  unreadable: 'the file cannot be read',
  'alpha-lost': 'alpha is lost: every texel is opaque now',
  'coverage-lost': '{share} of the coverage is lost at {image}',
  'texels-lost': '{share} of the texels are lost',
  'depth-lost': '{share} of the bits are lost',
  'tag-added': 'a color tag that is not sRGB was added',
  'normals-flattened': 'normals lose {share} of their length at {image}',
};

/** What a harm is, in English. */
export function sayHarm({ name, severity, image }: Harm): string {
  return harmWords[name]
    .replace('{share}', percent(severity))
    .replace('{image}', image === null ? '' : sayImage(image));
}
