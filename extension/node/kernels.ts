import { readFileSync } from 'node:fs';
import { type Problem, warning } from '../../core/problem.ts';

/** The SIMD engine's kernels from their file, compiled; or null and why they cannot run here. */
export function compileKernels(
  file: URL,
):
  | { readonly kernels: WebAssembly.Module; readonly missing: null }
  | { readonly kernels: null; readonly missing: Problem } {
  try {
    if (typeof WebAssembly === 'undefined') return without('WebAssembly is switched off');
    return { kernels: new WebAssembly.Module(readFileSync(file)), missing: null };
  } catch (error) {
    // Processors without SSE 4.1 and sandboxes that compile nothing end here, and a file that was left behind.
    return without(error instanceof Error ? error.message : String(error));
  }
}

function without(reason: string): { readonly kernels: null; readonly missing: Problem } {
  return { kernels: null, missing: warning('engine-plain', { reason }) };
}
