import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { methodOf } from '../../core/chain/method.ts';
import type { Wrap } from '../../core/kernel/wrap.ts';
import { type Codes, type Depth, type Extent, maxCode, newCodes } from '../../core/raster/raster.ts';
import type { Decoding, Engine, NormalGroup, Pass, RowsRun, Step } from '../../core/resample/engine.ts';
import type { KernelChoice } from '../../core/treatment/treatment.ts';
import { depths, kernels, LINEAR, oneOf, seeds } from '../fixtures/arbitrary.ts';
import { numbers } from '../fixtures/noise.ts';
import { treatment } from '../fixtures/treatment.ts';

/** A pass with the rows of its source. */
export interface PassCase {
  readonly pass: Pass;
  readonly rows: readonly Codes[];
}

const anyWrap = oneOf<Wrap>(['clamp-to-edge', 'repeat', 'mirror-repeat', 'clamp-to-border']);

const side = fc.oneof(fc.integer({ min: 1, max: 40 }), fc.constantFrom(1, 2, 4, 16, 17, 32, 33, 64, 127, 128));

/** Some rows are so long that they come in parts. */
const extent: fc.Arbitrary<Extent> = fc.oneof(
  { arbitrary: fc.record({ width: side, height: side }), weight: 9 },
  {
    arbitrary: fc.record({ width: oneOf([512, 513, 1024, 1100, 1541]), height: fc.integer({ min: 1, max: 5 }) }),
    weight: 1,
  },
);

/** Passes of up to five steps, each from the source or from an earlier one, down and up, in any channels. */
export const passes: fc.Arbitrary<PassCase> = fc
  .record({
    seed: seeds,
    depth: depths,
    channels: oneOf([1, 2, 3, 4, 4] as const),
    normals: oneOf(['none', 'none', 'three', 'two'] as const),
    weighs: fc.boolean(),
    wrap: fc.record({ x: anyWrap, y: anyWrap }),
    extent,
    steps: fc.array(
      fc.record({ from: fc.nat(4), extent, halved: fc.boolean(), kernel: kernels([...LINEAR, 'nearest']) }),
      { minLength: 1, maxLength: 5 },
    ),
  })
  .map((wanted) => {
    const next = numbers(wanted.seed);
    const decoding = decodingOf(wanted.depth, wanted.channels, wanted.normals, wanted.weighs, next);
    const extents = [wanted.extent];
    const steps = wanted.steps.map((step): Step => {
      const from = Math.min(step.from, extents.length - 1);
      const source = extents[from];
      const half = { width: Math.max(1, source.width >> 1), height: Math.max(1, source.height >> 1) };
      const to = step.halved ? half : step.extent;
      extents.push(to);
      return { from, extent: to, ...tapsOf(source, to, step.kernel) };
    });
    const length = wanted.extent.width * wanted.channels;
    const rows = Array.from({ length: wanted.extent.height }, () => oddRow(wanted.depth, length, next));
    return { pass: { extent: wanted.extent, wrap: wanted.wrap, decoding, steps }, rows };
  });

/** Everything that a pass hands out: of each row in order its node, its y and its bits, then the bits of the sums. */
export function traceOf(engine: Engine, { pass, rows }: PassCase): Buffer {
  return trace(engine, pass, (run) => {
    for (const row of rows) run.push(row);
  });
}

export function trace(engine: Engine, pass: Pass, feed: (run: RowsRun) => void): Buffer {
  const found: Buffer[] = [];
  const keep = (numbers: Uint32Array | Float32Array | Float64Array): void => {
    found.push(Buffer.from(Buffer.from(numbers.buffer, numbers.byteOffset, numbers.byteLength)));
  };
  const run = engine.open(pass, (node, y, floats) => {
    keep(Uint32Array.of(node, y));
    keep(floats);
  });
  feed(run);
  keep(run.sums());
  return Buffer.concat(found);
}

/** Where two traces part, in words; null where they are the same. A comparison of long texts by vitest would take minutes. */
export function difference(actual: Buffer, expected: Buffer): string | null {
  if (actual.equals(expected)) return null;
  if (actual.length !== expected.length) return `${actual.length} bytes for ${expected.length}`;
  const at = actual.findIndex((byte, i) => byte !== expected[i]) & ~3;
  return `at byte ${at} ${actual.readFloatLE(at)} for ${expected.readFloatLE(at)}`;
}

/** Numbers as a short text: equal where every bit is. */
export function hash(numbers: ArrayBufferView): string {
  const bytes = Buffer.from(numbers.buffer, numbers.byteOffset, numbers.byteLength);
  return createHash('sha256').update(bytes).digest('hex');
}

function tapsOf(from: Extent, to: Extent, kernel: KernelChoice): Pick<Step, 'x' | 'y'> {
  const method = methodOf(from, to, treatment({ kernel: { minify: kernel, magnify: kernel } }), 'it');
  if (method.kind !== 'rows' && method.kind !== 'codes') throw new RangeError(`Expected taps of ${kernel.name}`);
  return method;
}

/** Tables of any floats, none of them alike: a lane that is read for another shows. */
function decodingOf(
  depth: Depth,
  channels: 1 | 2 | 3 | 4,
  normals: 'none' | 'three' | 'two',
  weighs: boolean,
  next: () => number,
): Decoding {
  const tables = Array.from({ length: channels }, () => {
    const values = Float32Array.from({ length: 256 }, () => (next() % 9 === 0 ? 0 : next() / 2 ** 31 - 1));
    const table = new Float32Array(maxCode(depth) + 1);
    for (let from = 0; from < table.length; from += 256) table.set(values, from);
    return table;
  });
  const groups: NormalGroup[] = [];
  if (normals === 'two' && channels >= 2) groups.push({ x: 0, y: 1, z: channels, rebuilt: true });
  if (normals === 'three' && channels >= 3) groups.push({ x: 0, y: 1, z: 2, rebuilt: false });
  if (!weighs) return { depth, channels, tables, weighted: [], alpha: null, normals: groups };
  const alpha = next() % channels;
  const others = Array.from({ length: channels + (normals === 'two' && channels >= 2 ? 1 : 0) }, (_, i) => i);
  const weighted = others.filter((channel) => channel !== alpha && next() % 3 > 0);
  return { depth, channels, tables, weighted, alpha, normals: groups };
}

/** A row that does not begin where its buffer does. */
function oddRow(depth: Depth, length: number, next: () => number): Codes {
  const codes = newCodes(depth, length + 3).subarray(3);
  for (let i = 0; i < length; i++) codes[i] = next() % (maxCode(depth) + 1);
  return codes;
}
