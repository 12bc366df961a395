import type { StraightRaster } from '../../core/raster/raster.ts';
import type { Engine } from '../../core/resample/engine.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import type { Cases } from './cases.ts';
import { type Character, characters, draw } from './characters.ts';
import { checksum } from './checksum.ts';
import { alternate, type Contender, least, median, most, ratio, type Times } from './clock.ts';
import { digits, type Figure, type Findings, roundsText, type Table } from './figure.ts';
import { extentsBelow, megatexels, openEngine, ownChain } from './own.ts';
import { openPeers, type Peer } from './peers.ts';

/** The chain alone, in memory: against peers, and of each character. */
export async function benchChains({ chains, characters: each }: Cases): Promise<Findings> {
  const [engine, peers] = [openEngine(), await openPeers()];
  const tables: Table[] = [];
  const figures: Figure[] = [];
  for (const one of chains) {
    const image = draw('painted', { width: one.side, height: one.side }, 1);
    const rivals = [...peers.values()].filter(({ name }) => !one.without.some((start) => name.startsWith(start)));
    const found = await against(image, engine, rivals, one.rounds);
    tables.push(found.table);
    for (const [peer, id] of AGAINST) {
      const measured = found.ratios.get(peer);
      if (measured !== undefined) figures.push({ target: `${id}-${one.side}`, measured });
    }
  }
  tables.push(await ofCharacters(engine, each));
  return { tables, figures };
}

/** Which peer a target speaks of. */
const AGAINST = [
  ['sharp linear', 'linear'],
  ['sharp code space', 'code'],
  ['pica (code space)', 'pica'],
] as const;

const COLUMNS = ['', 'ms/MP median', 'low - high', 'Mtexel/s', 'times ours', 'checksum'] as const;

/** What the peers do and no more: color weighed by alpha, nothing filled, nothing scaled. */
const plain = treatment({ kernel: both('lanczos3'), fill: 'none' });

async function against(image: StraightRaster, engine: Engine, peers: readonly Peer[], rounds: number) {
  const levels = extentsBelow(image.extent);
  const own = (name: string, overrides: Parameters<typeof treatment>[0]): Contender => ({
    name,
    run: () => ownChain(engine, image, treatment({ kernel: both('lanczos3'), fill: 'none', ...overrides })),
  });
  const contenders: Contender[] = [
    { name: '**ours, Lanczos3, linear light**', run: () => ownChain(engine, image, plain) },
    own('ours, color under alpha 0 filled', { fill: 'hidden' }),
    own('ours, mask with coverage kept', { fill: 'hidden', alpha: { use: 'mask', keepCoverage: true } }),
    own('ours, box', { kernel: both('box') }),
    ...peers.map((peer) => ({ name: peer.name, run: () => peer.chain(image, levels) })),
  ];
  const times = await alternate(contenders, rounds);
  const size = megatexels(image.extent);
  const rows: string[][] = [];
  for (const [index, { name, run }] of contenders.entries()) {
    const sum = checksum((await run()) as readonly Uint8Array[]);
    rows.push([name, ...timeCells(times[index], size), digits(ratio(times[index], times[0])), sum]);
  }
  const ratios = new Map(contenders.map(({ name }, index) => [name, ratio(times[index], times[0])]));
  const { width, height } = image.extent;
  const table: Table = {
    title: `The chain of ${width} x ${height}`,
    says: `From codes in memory to the codes of all ${levels.length} levels below, painted RGBA of 8 bits; ${roundsText(rounds)}, every contender once a round. Ours hands floats from level to level, measures luminance and counts clipped samples; the peers start each level from rounded bytes. One thread each.`,
    columns: COLUMNS,
    rows,
  };
  return { table, ratios };
}

async function ofCharacters(engine: Engine, { side, rounds }: Cases['characters']): Promise<Table> {
  const images = characters.map((character) => draw(character, { width: side, height: side }, 2));
  const contenders = images.map((image, index): Contender => {
    const one = treatment(TREATED[characters[index]]);
    return { name: characters[index], run: () => ownChain(engine, image, one) };
  });
  const times = await alternate(contenders, rounds);
  const size = megatexels({ width: side, height: side });
  return {
    title: `Characters, ${side} x ${side}`,
    says: `Each with the treatment that it would have; ${roundsText(rounds)}.`,
    columns: ['', 'treatment', ...COLUMNS.slice(1, 4), 'checksum'],
    rows: contenders.map(({ name, run }, index) => {
      const sum = checksum(run() as readonly Uint8Array[]);
      return [name, SAID[characters[index]], ...timeCells(times[index], size), sum];
    }),
  };
}

const TREATED: Readonly<Record<Character, Parameters<typeof treatment>[0]>> = {
  painted: {},
  flat: {},
  tiled: { wrap: { x: 'repeat', y: 'repeat' } },
  cutout: { alpha: { use: 'mask', keepCoverage: true } },
  'pixel art': { kernel: both('nearest'), derive: 'base' },
  '16-bit': {},
};

const SAID: Readonly<Record<Character, string>> = {
  painted: 'Kaiser',
  flat: 'Kaiser',
  tiled: 'Kaiser, repeat',
  cutout: 'Kaiser, mask, coverage kept',
  'pixel art': 'nearest',
  '16-bit': 'Kaiser',
};

function timeCells(times: Times, size: number): string[] {
  const middle = median(times) / size;
  return [
    digits(middle),
    `${digits(least(times) / size)} - ${digits(most(times) / size)}`,
    digits((1000 * (2 ** 20 / 1e6)) / middle),
  ];
}
