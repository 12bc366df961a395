import { buildChain } from '../../core/chain/chain.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { type ReferenceLevel, referenceChain } from '../reference/chain.ts';
import type { Cases } from './cases.ts';
import { type Character, draw } from './characters.ts';
import { digits, type Figure, type Findings } from './figure.ts';
import { openEngine } from './own.ts';

/** How many codes differ from those of the same chain in double precision. */
export async function benchAccuracy({ accuracy: { side } }: Cases): Promise<Findings> {
  const engine = openEngine();
  const plain = treatment({ kernel: both('lanczos3'), fill: 'none' });
  const rows: string[][] = [];
  const figures: Figure[] = [];
  let farthest = 0;
  for (const [character, target] of [
    ['painted', 'differing-8'],
    ['16-bit', 'differing-16'],
  ] as const) {
    const { share, most } = compare(character, side, plain, engine);
    farthest = Math.max(farthest, most);
    rows.push([character, digits(share), String(most)]);
    figures.push({ target, measured: share });
  }
  figures.push({ target: 'difference', measured: farthest });
  return {
    figures,
    tables: [
      {
        title: 'Accuracy',
        says: `Lanczos3 chains of ${side} x ${side} in linear light against the same formulas in double precision, rounded once at the end. Color under alpha 0 is nobody's and is left out.`,
        columns: ['', 'codes that differ, ppm', 'by at most'],
        rows,
      },
    ],
  };
}

function compare(character: Character, side: number, one: Treatment, engine: ReturnType<typeof openEngine>) {
  const image = draw(character, { width: side, height: side }, 6);
  const exact = referenceChain(image, one).slice(1);
  const { images } = buildChain(image, one, { engine });
  let [codes, differing, most] = [0, 0, 0];
  for (const [index, level] of exact.entries()) {
    const { raster } = images[index + 1];
    if (raster.kind === 'indexed') throw new TypeError('Expected codes but received indices');
    for (let at = 0; at < raster.codes.length; at++) {
      if (isHidden(level, at)) continue;
      const distance = Math.abs(raster.codes[at] - level.codes[at]);
      codes++;
      if (distance > 0) differing++;
      most = Math.max(most, distance);
    }
  }
  return { share: (differing / codes) * 1e6, most };
}

function isHidden({ codes, channels }: ReferenceLevel, at: number): boolean {
  const channel = at % channels;
  return channels === 4 && channel < 3 && codes[at - channel + 3] === 0;
}
