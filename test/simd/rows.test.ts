import fc from 'fast-check';
import { expect, it } from 'vitest';
import { floatChannels } from '../../core/resample/decode.ts';
import { plainEngine } from '../../core/resample/plain.ts';
import { Machine } from '../../core/simd/machine.ts';
import { runBytes, SimdRun } from '../../core/simd/run.ts';
import { seeds } from '../fixtures/arbitrary.ts';
import { numbers } from '../fixtures/noise.ts';
import { kernelBytes, simdEngine } from '../fixtures/simd.ts';
import { holds } from '../laws/holds.ts';
import { difference, passes, trace, traceOf } from './passes.ts';

// The plain engine is the reference: every float of every row, the order of rows and the sums, bit for bit. Zeros have signs.

const simd = simdEngine();

it('makes the rows that the plain engine makes, in their order', () => {
  holds(passes, 600, (one) => {
    expect(difference(traceOf(simd, one), traceOf(plainEngine, one))).toBe(null);
  });
});

it('takes floats as a source, negative zeros among them', () => {
  holds(fc.tuple(passes, seeds), 200, ([{ pass }, seed]) => {
    const next = numbers(seed);
    const length = pass.extent.width * floatChannels(pass.decoding);
    const rows = Array.from({ length: pass.extent.height }, () =>
      Float32Array.from({ length }, () => (next() % 4 === 0 ? -0 : next() / 2 ** 31 - 1)),
    );
    const [actual, expected] = [simd, plainEngine].map((engine) =>
      trace(engine, pass, (run) => {
        for (const row of rows) run.pushFloats(row);
      }),
    );
    expect(difference(actual, expected)).toBe(null);
  });
});

it('runs passes side by side', () => {
  holds(fc.tuple(passes, passes), 50, ([a, b]) => {
    const nested = trace(simd, a.pass, (run) => {
      a.rows.forEach((row, y) => {
        run.push(row);
        if (y === 0) traceOf(simd, b);
      });
    });
    expect(difference(nested, traceOf(plainEngine, a))).toBe(null);
  });
});

it('goes on after a pass that was left half way', () => {
  holds(fc.tuple(passes, passes), 50, ([a, b]) => {
    simd.open(a.pass, () => undefined).push(a.rows[0]);
    expect(difference(traceOf(simd, b), traceOf(plainEngine, b))).toBe(null);
  });
});

it('takes the memory that it says, all of it when it opens, and gives it back', () => {
  const machine = new Machine(new WebAssembly.Module(kernelBytes()));
  holds(passes, 200, ({ pass, rows }) => {
    for (let again = 0; again < 2; again++) {
      const run = new SimdRun(
        machine,
        pass,
        () => undefined,
        () => machine.giveBack(),
      );
      expect(machine.taken).toBe(runBytes(pass));
      const { size } = machine;
      for (const row of rows) run.push(row);
      expect(machine.size).toBe(size);
      expect(machine.taken).toBe(0);
    }
  });
});
