import type { Engine, Pass } from '../resample/engine.ts';
import { plainEngine } from '../resample/plain.ts';
import { Machine, MOST_BYTES } from './machine.ts';
import { runBytes, SimdRun } from './run.ts';

/** The engine of core/simd/kernels, compiled: what plain.ts makes, bit for bit. Its memory is kept from one pass to the next;
 *  a pass that needs more than a machine can hold, or the system gives, runs on the plain engine. */
export function createEngine(module: WebAssembly.Module): Engine {
  let idle: Machine | null = null;
  return {
    name: 'simd',
    passBytes: (pass) => (fits(pass) ? runBytes(pass) : plainEngine.passBytes(pass)),
    open(pass, sink) {
      if (!fits(pass)) return plainEngine.open(pass, sink);
      try {
        const machine = idle ?? new Machine(module);
        idle = null;
        return new SimdRun(machine, pass, sink, () => {
          machine.giveBack();
          if (machine.size <= IDLE_BYTES) idle = machine;
        });
      } catch (error) {
        // A machine wants its memory in one piece, and many a system reserves gigabytes of addresses for it.
        if (!(error instanceof RangeError)) throw error;
        return plainEngine.open(pass, sink);
      }
    },
  };
}

/** A machine that grew beyond this is not kept. */
const IDLE_BYTES = 2 ** 26;

function fits(pass: Pass): boolean {
  return runBytes(pass) <= MOST_BYTES / 2;
}
