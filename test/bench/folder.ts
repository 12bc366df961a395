import { mkdirSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pngBytes } from './builds.ts';
import type { Cases } from './cases.ts';
import { characters, draw } from './characters.ts';
import { alternate, least, median, most, ratio } from './clock.ts';
import { inFolder, sizeproof } from './command.ts';
import { digits, type Findings, roundsText } from './figure.ts';
import { openSharp } from './peers.ts';
import { buildBySharp, packingFor, packingWords } from './sharp-build.ts';
import { packSource, plainSettings } from './sources.ts';

/** A folder of textures of all sizes and characters, by two workers. */
export function benchFolder({ folder: { counts, rounds } }: Cases): Promise<Findings> {
  return inFolder(async (top) => {
    // Two files at a time keep two processors busier than two threads in one file.
    const sharp = openSharp(1);
    mkdirSync(join(top, 'in'));
    const files: string[] = [];
    let texels = 0;
    for (const [side, count] of counts) {
      const known = new Map<string, Uint8Array>();
      for (let index = 0; index < count; index++) {
        const character = characters[index % characters.length];
        // As many pictures as are soon drawn, each under several names.
        const seed = Math.floor(index / characters.length) % DRAWN;
        const file = join(top, 'in', `${side}-${index}.png`);
        const key = `${character} ${seed}`;
        const bytes = known.get(key) ?? (await packSource(sharp, draw(character, { width: side, height: side }, seed)));
        known.set(key, bytes);
        writeFileSync(file, bytes);
        files.push(file);
        texels += side ** 2;
      }
    }
    writeFileSync(join(top, 'sizeproof.json'), plainSettings);
    const ours = async () => {
      rmSync(join(top, 'out'), { recursive: true, force: true });
      rmSync(join(top, '.cache'), { recursive: true, force: true });
      await sizeproof(top, ['build', 'in', '--out', 'out', '--jobs', '2']);
    };
    await ours();
    const bytes = pngBytes(join(top, 'out'));
    const probe = join(top, 'probe');
    mkdirSync(probe);
    const sample = files.filter((_, index) => index % Math.ceil(files.length / SAMPLED) === 0);
    await sizeproof(top, ['build', ...sample, '--out', 'probe', '--jobs', '2']);
    const packing = await packingFor(sharp, sample, join(top, 'sharp'), pngBytes(probe));
    let theirs = 0;
    const bySharp = async () => {
      rmSync(join(top, 'sharp'), { recursive: true, force: true });
      theirs = 0;
      const left = [...files.entries()];
      const lane = async () => {
        for (let next = left.shift(); next !== undefined; next = left.shift()) {
          // Added once it is there: the other lane adds to the same sum meanwhile.
          const made = await buildBySharp(sharp, next[1], join(top, 'sharp', String(next[0])), packing);
          theirs += made;
        }
      };
      await Promise.all([lane(), lane()]);
    };
    const contenders = [
      { name: '**ours, two workers**', run: ours, bytes: () => bytes },
      { name: `sharp linear, two files at a time (${packingWords(packing)})`, run: bySharp, bytes: () => theirs },
    ];
    const times = await alternate(contenders, rounds, 'ready');
    return {
      figures: [{ target: 'folder', measured: ratio(times[1], times[0]) }],
      tables: [
        {
          title: `A folder of ${files.length} textures`,
          says: `${counts.map(([side, count]) => `${count} of ${side} x ${side}`).join(', ')}, of all characters in turn; PNG files to the PNG files of their levels, files written, ${roundsText(rounds)}. Ours is the command line in a process of its own, with manifests and hashes.`,
          columns: ['', 's', 'low - high', 'ms/MP', 'times ours', 'bytes out'],
          rows: contenders.map(({ name, bytes: size }, index) => [
            name,
            digits(median(times[index]) / 1000),
            `${digits(least(times[index]) / 1000)} - ${digits(most(times[index]) / 1000)}`,
            digits(median(times[index]) / (texels / 2 ** 20)),
            digits(ratio(times[index], times[0])),
            String(size()),
          ]),
        },
      ],
    };
  });
}

/** Pictures of each size and character. */
const DRAWN = 3;

/** Files by which the packing is chosen that comes nearest to ours in bytes. */
const SAMPLED = 40;
