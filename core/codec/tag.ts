import { refuse } from '../problem.ts';
import type { ColorChunk } from './source.ts';

/** What a file's color chunks say about its colors, for treatments that obey them: the exponent they were encoded with,
 *  or null where they are sRGB. Of several chunks the first of cICP, iCCP, sRGB, gAMA with cHRM rules. Throws Refusal for
 *  what this version cannot obey: other primaries than sRGB's, profiles, other transfer functions.
 *  [PNG3, 4.3 Color spaces; H273 for the numbers of cICP] */
export function obeyedGamma(chunks: readonly ColorChunk[]): number | null {
  const value = (name: ColorChunk['name']): string | undefined => chunks.find((chunk) => chunk.name === name)?.value;
  const cicp = value('cICP');
  if (cicp !== undefined) return gammaOfCicp(cicp);
  const profile = value('iCCP');
  if (profile !== undefined) return cannotObey('iCCP', profile);
  if (value('sRGB') !== undefined) return null;
  const primaries = value('cHRM');
  if (primaries !== undefined && !areSrgb(primaries)) return cannotObey('cHRM', primaries);
  const gamma = value('gAMA');
  if (gamma === undefined) return null;
  return Number(gamma) > 0 ? Number(gamma) / 100000 : cannotObey('gAMA', gamma);
}

/** Primaries 1 are BT.709's, which sRGB shares; transfer 13 is sRGB's, 8 is none; matrix 0, full range 1. */
function gammaOfCicp(value: string): number | null {
  if (value === '1 13 0 1') return null;
  if (value === '1 8 0 1') return 1;
  return cannotObey('cICP', value);
}

/** White and primaries that the PNG specification gives for sRGB, in 1/100000; writers round the last digits differently. */
const SRGB_PRIMARIES = [31270, 32900, 64000, 33000, 30000, 60000, 15000, 6000];
const ROUNDING = 10;

function areSrgb(value: string): boolean {
  const found = value.split(' ').map(Number);
  return SRGB_PRIMARIES.every((expected, i) => Math.abs(found[i] - expected) <= ROUNDING);
}

function cannotObey(chunk: string, value: string): never {
  return refuse('color-chunk', { chunk, value });
}
