import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Cases } from './cases.ts';
import { draw } from './characters.ts';
import { least, median, most } from './clock.ts';
import { beside, inFolder, node } from './command.ts';
import { digits, type Findings } from './figure.ts';

/** How long the engine takes in a process that has never run it. */
export function benchCold({ cold: { side, rounds } }: Cases): Promise<Findings> {
  return inFolder(async (folder) => {
    const codes = join(folder, 'codes');
    writeFileSync(codes, draw('painted', { width: side, height: side }, 7).codes);
    const printed: number[][] = [];
    for (let round = 0; round < rounds; round++) {
      printed.push(JSON.parse(await node([beside('cold-start.js'), codes, String(side)], folder)));
    }
    const names = ['compile', 'first chain: tables and run', 'both'];
    const columns = names.map((_, index) => printed.map((times) => times[index]));
    return {
      figures: [{ target: 'cold', measured: median(columns[2]) }],
      tables: [
        {
          title: 'Cold start',
          says: `Lanczos3 chain of ${side} x ${side}, ${rounds} processes of their own. The codes and the kernels' bytes are in memory, the program is loaded and has not run.`,
          columns: ['', 'ms', 'low - high'],
          rows: names.map((name, index) => [
            name,
            digits(median(columns[index])),
            `${digits(least(columns[index]))} - ${digits(most(columns[index]))}`,
          ]),
        },
      ],
    };
  });
}
