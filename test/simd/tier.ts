import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { buildChain } from '../../core/chain/chain.ts';
import { deflateRuns } from '../../core/codec/deflate/stream.ts';
import { plainTokens, type Tokens } from '../../core/codec/deflate/tokens.ts';
import { plainFilters, type RowFilters } from '../../core/codec/png/filters.ts';
import type { Engine } from '../../core/resample/engine.ts';
import { plainEngine } from '../../core/resample/plain.ts';
import { createEngine } from '../../core/simd/engine.ts';
import { createFilters } from '../../core/simd/filters.ts';
import { createTokens } from '../../core/simd/tokens.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { treatment } from '../fixtures/treatment.ts';
import { passes, traceOf } from './passes.ts';
import { filterCases, undone, written } from './rows-through-filters.ts';

// Run by itself, with flags for V8: prints a hash of what an engine makes. Arguments: `plain`, or the file of the kernels.

const [file] = process.argv.slice(2);
const kernels = file === 'plain' ? null : new WebAssembly.Module(readFileSync(file));
const engine = kernels === null ? plainEngine : createEngine(kernels);
const filters = kernels === null ? plainFilters : createFilters(kernels);
console.log(hashOf(engine, filters, kernels === null ? plainTokens : createTokens(kernels)));

function hashOf(of: Engine, filters: RowFilters, tokens: Tokens): string {
  const hash = createHash('sha256');
  for (const one of fc.sample(filterCases, { numRuns: 300, seed: 1 })) {
    for (const row of [...written(filters, one), ...undone(filters, one)]) hash.update(row);
  }
  for (const runs of [0, 1, 2]) {
    // Noise, and runs here and there: every path of the tokens.
    const raster = noiseRaster(runs, { width: 300, height: 300 }, 1, 8, runs === 0 ? 'noise' : 'extremes');
    for (const piece of deflateRuns([raster.codes as Uint8Array], tokens)) hash.update(piece);
  }
  for (const one of fc.sample(passes, { numRuns: 40, seed: 1 })) hash.update(traceOf(of, one));
  for (const channels of [1, 2, 3, 4] as const) {
    for (const depth of [8, 16] as const) {
      for (const content of ['color', 'data'] as const) {
        const raster = withAlpha(noiseRaster(5, { width: 45, height: 30 }, channels, depth, 'noise'), 6, 3, 3);
        const { images } = buildChain(channels % 2 === 0 ? raster : { ...raster }, treatment({ content }), {
          engine: of,
        });
        for (const { raster: made, clipped, light } of images) {
          if (made.kind !== 'indexed')
            hash.update(new Uint8Array(made.codes.buffer, made.codes.byteOffset, made.codes.byteLength));
          hash.update(JSON.stringify({ clipped, light }));
        }
      }
    }
  }
  return hash.digest('hex');
}
