import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Cases } from './cases.ts';
import { characters, draw } from './characters.ts';
import { clock, least, median, most } from './clock.ts';
import { inFolder, sizeproof } from './command.ts';
import { digits, type Findings, roundsText } from './figure.ts';
import { openSharp } from './peers.ts';
import { packSource, writeSource } from './sources.ts';

/** A project of many small textures: the first build, builds of which nothing changed, and builds of which one did. */
export function benchProject({ project: { count, side, rounds } }: Cases): Promise<Findings> {
  return inFolder(async (folder) => {
    const sharp = openSharp(1);
    const images: Uint8Array[] = [];
    for (const character of characters) {
      images.push(await packSource(sharp, draw(character, { width: side, height: side }, 1)));
    }
    for (let index = 0; index < count; index++) {
      const below = join(folder, `in/${Math.floor(index / 100)}`);
      mkdirSync(below, { recursive: true });
      writeFileSync(join(below, `${index}.png`), images[index % images.length]);
    }
    writeFileSync(join(folder, 'sizeproof.json'), '{}');
    const build = () => sizeproof(folder, ['build', 'in', '--out', 'out', '--jobs', '2']);
    const first = await clock(build);
    // What was hashed a moment ago is not trusted yet.
    await new Promise((resolve) => setTimeout(resolve, SETTLED_MS));
    await build();
    const unchanged: number[] = [];
    const changed: number[] = [];
    for (let round = 0; round < rounds; round++) {
      unchanged.push(await clock(build));
      const image = draw('painted', { width: side, height: side }, 100 + round);
      await writeSource(sharp, image, join(folder, 'in/0/1.png'));
      changed.push(await clock(build));
    }
    const row = (name: string, times: readonly number[]): string[] => [
      name,
      digits(median(times) / 1000),
      `${digits(least(times) / 1000)} - ${digits(most(times) / 1000)}`,
    ];
    return {
      figures: [
        { target: 'unchanged', measured: median(unchanged) / 1000 },
        { target: 'one-changed', measured: median(changed) / 1000 },
      ],
      tables: [
        {
          title: `A project of ${count} textures`,
          says: `${side} x ${side} each, PNG and KTX2 written, the command line in a process of its own, ${roundsText(rounds)}.`,
          columns: ['', 's', 'low - high'],
          rows: [row('first build, once', [first]), row('nothing changed', unchanged), row('one changed', changed)],
        },
      ],
    };
  });
}

/** Beyond what the stat index takes for fresh. */
const SETTLED_MS = 2500;
