import type { Target } from '../treatment.ts';
import { extentText, scaleText } from './grammar.ts';

/** A target as the settings file has it, checked. */
export type TargetSetting =
  | string
  | { readonly scale: number; readonly name?: string }
  | { readonly extent: readonly [number, number]; readonly name?: string }
  | { readonly cell: readonly [number, number]; readonly name?: string };

/** A target with its name: as given, or `2x`, `0.75x`, `48x48`. */
export function resolveTarget(setting: TargetSetting): Target {
  if (typeof setting === 'string') return resolveTarget(parseTarget(setting));
  if ('scale' in setting) return { name: setting.name ?? `${setting.scale}x`, scale: setting.scale };
  if ('extent' in setting) return { name: setting.name ?? setting.extent.join('x'), extent: setting.extent };
  return { name: setting.name ?? setting.cell.join('x'), cell: setting.cell };
}

function parseTarget(text: string): Exclude<TargetSetting, string> {
  const scale = scaleText.exec(text);
  if (scale !== null) return { scale: Number(scale[1]) };
  const extent = extentText.exec(text);
  if (extent === null) throw new TypeError(`Expected a checked target but received ${text}`);
  return { extent: [Number(extent[1]), Number(extent[2])] };
}
