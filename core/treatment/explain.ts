import type { Place } from '../problem.ts';
import type { Texture } from './treatment.ts';

/** Why one setting of a texture is what it is. */
export interface ExplainRow {
  /** Dotted path: `alpha.cutoff`. */
  readonly key: string;
  readonly value: unknown;
  /** `built-in`, `defaults` or `treatments[2]`. */
  readonly rule: string;
  /** Of the value in the settings file; null for a built-in one. */
  readonly place: Place | null;
}

/** A row a setting, in the order of keys.ts. */
export function explainTexture(texture: Texture): readonly ExplainRow[] {
  return texture.origins.map(({ key, value, rule, path, line, column }) => {
    const place = path === undefined || line === undefined || column === undefined ? null : { path, line, column };
    return { key, value, rule, place };
  });
}
