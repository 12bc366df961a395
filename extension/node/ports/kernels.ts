import { readFileSync } from 'node:fs';
import { type Compiled, compileKernels } from '../../../core/simd/compile.ts';

/** The SIMD engine's kernels from their file. */
export function readKernels(file: URL): Compiled {
  return compileKernels(() => readFileSync(file));
}
