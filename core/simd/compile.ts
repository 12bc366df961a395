import { type Problem, warning } from '../problem.ts';

/** The kernels, compiled; or null and why they cannot run here. */
export type Compiled =
  | { readonly kernels: WebAssembly.Module; readonly missing: null }
  | { readonly kernels: null; readonly missing: Problem };

/** Compiles core/simd/kernels from the bytes of their module, as far as the machine can run them. `read` may throw. */
export function compileKernels(read: () => Uint8Array<ArrayBuffer>): Compiled {
  try {
    if (typeof WebAssembly === 'undefined') return without('WebAssembly is switched off');
    return { kernels: new WebAssembly.Module(read()), missing: null };
  } catch (error) {
    // Processors without SSE 4.1 and sandboxes that compile nothing end here, and a file that was left behind.
    return without(error instanceof Error ? error.message : String(error));
  }
}

function without(reason: string): Compiled {
  return { kernels: null, missing: warning('engine-plain', { reason }) };
}
