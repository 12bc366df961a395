import { headOf } from '../../core/chain/chain.ts';
import { passOf, planChain } from '../../core/chain/plan.ts';
import type { Taps } from '../../core/kernel/taps.ts';
import type { Pass } from '../../core/resample/engine.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import type { Cases, PhaseCase } from './cases.ts';
import { draw } from './characters.ts';
import { checksum } from './checksum.ts';
import { alternate, type Contender, least, median, most, ratio } from './clock.ts';
import { digits, type Findings, roundsText } from './figure.ts';
import { openEngine } from './own.ts';

/** What any size costs against 2:1 of a power of two: float rows in, float rows out, neither decoded nor stored. */
export async function benchPhases({ phases: { side, rounds, cases } }: Cases): Promise<Findings> {
  const engine = openEngine();
  const square = { width: side, height: side };
  const kernels = [...new Set(cases.map((one) => one.kernel))];
  const references = kernels.map(
    (kernel): PhaseCase => ({ name: '2:1 chain', from: square, to: null, kernel, wrap: 'clamp-to-edge' }),
  );
  const works = [...references, ...cases].map((one) => workOf(one));
  const contenders = works.map(({ one, pass, rows }): Contender => {
    const run = (): readonly Float32Array[] => {
      const last: Float32Array[] = [];
      const open = engine.open(pass, (node, y, floats) => {
        if (node === pass.steps.length && y === 0) last.push(floats.slice());
      });
      for (const row of rows) open.pushFloats(row);
      return last;
    };
    return { name: one.name, run };
  });
  const times = await alternate(contenders, rounds);
  // A tap of four channels: nanoseconds each.
  const perTap = times.map((each, index) => each.map((time) => (time * 1e6) / works[index].taps));
  const slower = perTap.map((each, index) => ratio(each, perTap[kernels.indexOf(works[index].one.kernel)]));
  return {
    figures: [{ target: 'phases', measured: most(slower.slice(kernels.length)) }],
    tables: [
      {
        title: 'Any size, kernel and wrap',
        says: `RGBA float rows through both passes of each level, ${roundsText(rounds)}. A tap is one weight times one texel of four channels. Phases that are not symmetric have twice the weights and a third more arithmetic.`,
        columns: ['', 'kernel', 'from', 'ns/tap median', 'low - high', 'against its 2:1', 'checksum'],
        rows: contenders.map(({ name, run }, index) => [
          name,
          works[index].one.kernel,
          `${works[index].one.from.width}`,
          digits(median(perTap[index])),
          `${digits(least(perTap[index]))} - ${digits(most(perTap[index]))}`,
          digits(slower[index]),
          checksum(run() as readonly Float32Array[]),
        ]),
      },
    ],
  };
}

interface Work {
  readonly one: PhaseCase;
  readonly pass: Pass;
  readonly rows: readonly Float32Array[];
  readonly taps: number;
}

function workOf(one: PhaseCase): Work {
  const image = draw('painted', one.from, 3);
  const { pass } = passOf(planChain(headOf(image), treatmentOf(one)));
  const length = one.from.width * 4;
  const rows = Array.from({ length: one.from.height }, (_, y) =>
    Float32Array.from(image.codes.subarray(y * length, (y + 1) * length)),
  );
  return { one, pass, rows, taps: tapsOf(pass) };
}

function treatmentOf({ to, kernel, wrap }: PhaseCase): Treatment {
  const target = to === null ? [] : [{ name: 'it', extent: [to.width, to.height] as const }];
  return treatment({
    kernel: both(kernel),
    wrap: { x: wrap, y: wrap },
    fill: 'none',
    levels: to === null ? { first: 0, last: null } : 'none',
    targets: target,
  });
}

function tapsOf({ extent, steps }: Pass): number {
  const heights = [extent.height, ...steps.map((step) => step.extent.height)];
  return steps.reduce((sum, { from, x, y }) => sum + count(x) * heights[from] + count(y) * x.to, 0);
}

function count(taps: Taps): number {
  return taps.count.reduce((sum, each) => sum + each, 0);
}
