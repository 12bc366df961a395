import { alternate, least, median, most } from './clock.ts';
import { digits, type Findings, roundsText } from './figure.ts';

/** What the machine can do at best, whatever the program: how fast memory is copied, and how fast one thread multiplies and adds
 *  vectors of four floats. */
export async function benchLimits(rounds: number): Promise<Findings> {
  const from = new Uint8Array(COPIED).fill(1);
  const to = new Uint8Array(COPIED).fill(2);
  const spin = await compileSpin();
  const [copies, spins] = await alternate(
    [
      { name: 'copy', run: () => to.set(from) },
      { name: 'spin', run: () => spin(TURNS) },
    ],
    rounds,
  );
  const gigabytes = copies.map((time) => COPIED / 1e6 / time);
  const vectors = spins.map((time) => (TURNS * OPERATIONS) / 1e6 / time);
  const row = (name: string, values: readonly number[], unit: string) => [
    name,
    `${digits(median(values))} ${unit}`,
    `${digits(least(values))} - ${digits(most(values))}`,
  ];
  return {
    figures: [],
    tables: [
      {
        title: 'Limits of the machine',
        says: `Measured in the same run, ${roundsText(rounds)}: ${COPIED / 2 ** 20} MiB copied within memory (read and written once each), and additions and multiplications of f32x4 that wait for nothing.`,
        columns: ['', 'median', 'low - high'],
        rows: [row('copy', gigabytes, 'GB/s'), row('f32x4, one thread', vectors, 'G/s')],
      },
    ],
  };
}

const COPIED = 2 ** 26;

const TURNS = 2 ** 22;

/** Vector operations of one turn. */
const OPERATIONS = 24;

/** Twelve chains that do not wait for each other, a product and a sum each: more than any processor's latency. */
async function compileSpin(): Promise<(turns: number) => number> {
  const chains = Array.from({ length: OPERATIONS / 2 }, (_, index) => `v${index}`);
  const source = `export function spin(turns: i32): f32 {
    const k = f32x4.splat(0.5);
    ${chains.map((chain, index) => `let ${chain} = f32x4.splat(${index});`).join('\n')}
    for (let i = 0; i < turns; i++) {
      ${chains.map((chain) => `${chain} = f32x4.add(f32x4.mul(${chain}, k), k);`).join('\n')}
    }
    return f32x4.extract_lane(${chains.reduce((sum, chain) => `f32x4.add(${sum}, ${chain})`)}, 0);
  }`;
  // Found from the top of the tree, where the build's own compiler is installed.
  const path = import.meta.resolve('assemblyscript/asc');
  const asc: typeof import('assemblyscript/asc') = await import(path);
  const { binary, error } = await asc.compileString(source, { optimizeLevel: 3, runtime: 'stub', enable: ['simd'] });
  if (binary === null) throw error ?? new Error('The measure of arithmetic could not be compiled.');
  const { spin } = new WebAssembly.Instance(new WebAssembly.Module(new Uint8Array(binary)), {
    env: { abort: () => undefined },
  }).exports;
  return spin as (turns: number) => number;
}
