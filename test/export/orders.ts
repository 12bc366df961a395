import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { encodePng } from '../../core/codec/png/encode.ts';
import { type ProofOrder, startPreferences } from '../../core/export/order.ts';
import type { BenchPorts } from '../../core/proof/bench.ts';
import type { IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { top } from '../house/tree.ts';

export const ports: BenchPorts = { inflate, newHash, pause: async () => undefined };

export const goOn = { cancelled: false };

/** The proof of a texture of the demo, with its own settings. */
export function demoOrder(path: string, more: Partial<ProofOrder> = {}): ProofOrder {
  const demo = join(top, 'test/demo');
  const { settings } = parseSettings(readFileSync(join(demo, 'sizeproof.json'), 'utf8'), '/somewhere/sizeproof.json');
  const { treatment, origins } = resolveTreatment(settings, path);
  const rules = settings!.rules.filter((rule) => rule.match !== null && rule.hits(path));
  return {
    name: path.slice(path.lastIndexOf('/') + 1),
    path,
    image: readFileSync(join(demo, path)),
    roughness: null,
    settings: { file: 'sizeproof.json', globs: rules[rules.length - 1]?.match ?? null, treatment, origins },
    state: null,
    preferences: startPreferences,
    remark: null,
    ...more,
  };
}

/** The proof of any raster by settings that are given as their text. */
export async function rasterOrder(
  raster: StraightRaster | IndexedRaster,
  defaults: object = {},
  more: Partial<ProofOrder> = {},
): Promise<ProofOrder> {
  const { settings, problems } = parseSettings(JSON.stringify({ defaults }), 'sizeproof.json');
  if (settings === null) throw new Error(JSON.stringify(problems));
  const { treatment, origins } = resolveTreatment(settings, 'a.png');
  return {
    name: 'a.png',
    path: 'a.png',
    image: await encodePng(raster, deflate),
    roughness: null,
    settings: { file: 'sizeproof.json', globs: null, treatment, origins },
    state: null,
    preferences: startPreferences,
    remark: null,
    ...more,
  };
}
