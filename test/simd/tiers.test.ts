import { execFileSync } from 'node:child_process';
import { join } from 'node:path';
import { build } from 'esbuild';
import { beforeAll, expect, it } from 'vitest';
import { kernelBytes } from '../fixtures/simd.ts';
import { top } from '../house/tree.ts';

// V8 compiles a module twice, first quickly and later well, in between it mixes both, and other machines have other compilers:
// what is computed must not tell.

const script = join(top, `dist/test/${process.pid}/tier.mjs`);
let expected: string;

beforeAll(async () => {
  kernelBytes();
  const entry = join(top, 'test/simd/tier.ts');
  await build({
    entryPoints: [entry],
    outfile: script,
    bundle: true,
    platform: 'node',
    format: 'esm',
    logLevel: 'error',
  });
  expected = hashBy([], 'plain');
});

it.each([['--liftoff-only'], ['--no-liftoff'], ['--no-wasm-tier-up'], ['--no-enable-avx']])(
  'makes the same with %s',
  (flag) => {
    expect(hashBy([flag], join(top, 'dist/engine.wasm'))).toBe(expected);
  },
);

function hashBy(flags: readonly string[], kernels: string): string {
  return execFileSync(process.execPath, [...flags, script, kernels], { encoding: 'utf8' });
}
