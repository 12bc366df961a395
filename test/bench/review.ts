import { execFileSync } from 'node:child_process';
import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Cases } from './cases.ts';
import { characters, draw } from './characters.ts';
import { clock, least, median, most } from './clock.ts';
import { inFolder, sizeproof } from './command.ts';
import { digits, type Findings, roundsText } from './figure.ts';
import { openSharp } from './peers.ts';
import { packSource, remarked } from './sources.ts';

/** A commit that changes many textures: listed by their headers, and compared at every size. */
export function benchReview({ review: { count, side, rounds, wholeRounds } }: Cases): Promise<Findings> {
  return inFolder(async (folder) => {
    await makeRepository(folder, count, side);
    const run = (...args: readonly string[]) => clock(() => sizeproof(folder, ['review', 'HEAD', ...args]));
    const [headers, whole]: [number[], number[]] = [[], []];
    for (let round = 0; round < rounds; round++) {
      headers.push(await run('--headers'));
      if (round < wholeRounds) whole.push(await run('--jobs', '2'));
    }
    const row = (name: string, times: readonly number[]): string[] => [
      name,
      digits(median(times) / 1000),
      `${digits(least(times) / 1000)} - ${digits(most(times) / 1000)}`,
    ];
    return {
      figures: [{ target: 'review', measured: median(headers) / 1000 }],
      tables: [
        {
          title: `A review of ${count} changed textures`,
          says: `One commit that repaints ${count} files of ${side} x ${side}, of all characters in turn; the command line in a process of its own, ${roundsText(rounds)}, of the comparison ${roundsText(wholeRounds)}. Every file is another object to Git.`,
          columns: ['', 's', 'low - high'],
          rows: [row('listed by ids and headers', headers), row('compared at every size, two workers', whole)],
        },
      ],
    };
  });
}

/** A repository of two commits; the second changes every texture of the first. */
async function makeRepository(folder: string, count: number, side: number): Promise<void> {
  const git = (...args: readonly string[]) =>
    execFileSync('git', ['-c', 'user.name=A', '-c', 'user.email=a@example.org', ...args], { cwd: folder });
  const sharp = openSharp(1);
  git('init', '--quiet');
  writeFileSync(join(folder, 'sizeproof.json'), '{}');
  writeFileSync(join(folder, '.gitignore'), '.cache\n');
  for (const version of [1, 2]) {
    const images: Uint8Array[] = [];
    for (const character of characters) {
      images.push(await packSource(sharp, draw(character, { width: side, height: side }, version)));
    }
    for (let index = 0; index < count; index++) {
      const below = join(folder, `in/${Math.floor(index / 100)}`);
      mkdirSync(below, { recursive: true });
      // A text of its own, so that no two files are one object.
      writeFileSync(join(below, `${index}.png`), remarked(images[index % images.length], `${version} ${index}`));
    }
    git('add', '--all');
    git('commit', '--quiet', '--message', 'x');
  }
}
