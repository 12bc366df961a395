import { readdirSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Cases } from './cases.ts';
import { draw } from './characters.ts';
import { alternate, type Contender, least, median, most, ratio } from './clock.ts';
import { inFolder, sizeproof } from './command.ts';
import { digits, type Figure, type Findings, roundsText, type Table } from './figure.ts';
import { openSharp } from './peers.ts';
import { buildBySharp, packingFor, packingWords } from './sharp-build.ts';
import { plainSettings, writeSource } from './sources.ts';

/** Whole builds of one texture: PNG in, the PNG files of all levels out. */
export async function benchBuilds({ builds: { sides, rounds } }: Cases): Promise<Findings> {
  const figures: Figure[] = [];
  const tables: Table[] = [];
  for (const side of sides) {
    const found = await inFolder((folder) => ofSide(folder, side, rounds));
    tables.push(found.table);
    if (side === most(sides)) figures.push(...found.figures);
  }
  return { tables, figures };
}

async function ofSide(folder: string, side: number, rounds: number) {
  const sharp = openSharp(1);
  await writeSource(sharp, draw('painted', { width: side, height: side }, 4), join(folder, 'a.png'));
  writeFileSync(join(folder, 'sizeproof.json'), plainSettings);
  const build = (jobs: number) => async () => {
    rmSync(join(folder, 'out'), { recursive: true, force: true });
    await sizeproof(folder, ['build', 'a.png', '--out', 'out', '--jobs', String(jobs)]);
  };
  await build(1)();
  const bytes = pngBytes(join(folder, 'out'));
  const packing = await packingFor(sharp, [join(folder, 'a.png')], join(folder, 'sharp'), bytes);
  let theirs = 0;
  const contenders: Contender[] = [
    { name: '**ours, one worker**', run: build(1) },
    { name: 'ours, two workers', run: build(2) },
    {
      name: `sharp linear, one thread (${packingWords(packing)})`,
      run: async () => {
        theirs = await buildBySharp(sharp, join(folder, 'a.png'), join(folder, 'sharp'), packing);
      },
    },
  ];
  const times = await alternate(contenders, rounds);
  const size = side ** 2 / 2 ** 20;
  const sizes = [bytes, bytes, theirs];
  const figures: Figure[] = [
    { target: 'build', measured: ratio(times[2], times[0]) },
    { target: 'workers', measured: ratio(times[0], times[1]) },
  ];
  const table: Table = {
    title: `Whole build of ${side} x ${side}`,
    says: `Painted RGBA of 8 bits from its PNG file to the PNG files of its levels, ${roundsText(rounds)}. Ours is the command line in a process of its own, its start, its hashes and its manifest included; sharp runs in a process that has started.`,
    columns: ['', 'ms', 'low - high', 'ms/MP', 'times ours', 'bytes out'],
    rows: contenders.map(({ name }, index) => [
      name,
      digits(median(times[index])),
      `${digits(least(times[index]))} - ${digits(most(times[index]))}`,
      digits(median(times[index]) / size),
      digits(ratio(times[index], times[0])),
      String(sizes[index]),
    ]),
  };
  return { table, figures };
}

/** Bytes of all PNG files below a folder. */
export function pngBytes(folder: string): number {
  const files = readdirSync(folder, { recursive: true }).map(String);
  return files
    .filter((name) => name.endsWith('.png'))
    .reduce((sum, name) => sum + statSync(join(folder, name)).size, 0);
}
