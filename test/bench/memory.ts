import { statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { headOf } from '../../core/chain/chain.ts';
import { passOf, planChain } from '../../core/chain/plan.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import type { Cases } from './cases.ts';
import { draw } from './characters.ts';
import { beside, inFolder, node } from './command.ts';
import { digits, type Findings } from './figure.ts';
import { openEngine } from './own.ts';
import { openSharp } from './peers.ts';
import { plainSettings, writeSource } from './sources.ts';

/** What a build holds: the engine's own memory, and the peak of the whole process. */
export function benchMemory({ memory: { side } }: Cases): Promise<Findings> {
  return inFolder(async (folder) => {
    const image = draw('painted', { width: side, height: side }, 5);
    const source = join(folder, 'a.png');
    await writeSource(openSharp(1), image, source);
    writeFileSync(join(folder, 'sizeproof.json'), plainSettings);
    const { pass } = passOf(planChain(headOf(image), treatment({ kernel: both('lanczos3'), fill: 'none' })));
    const working = openEngine().passBytes(pass) / 2 ** 20;
    const bare = await peakOf(folder, ['--eval', '0']);
    const build = [beside('cli.js'), 'build', 'a.png', '--out', 'out', '--jobs', '1', '--quiet'];
    const whole = await peakOf(folder, build);
    const file = statSync(source).size / 1e6;
    const over = whole - bare;
    return {
      figures: [
        { target: 'working-memory', measured: working },
        { target: 'peak', measured: over - file },
      ],
      tables: [
        {
          title: `Memory of a build of ${side} x ${side}`,
          says: 'Painted RGBA of 8 bits, Lanczos3, nothing filled, PNG levels, one worker. The engine takes its memory when a chain begins and no more later. Peaks are resident memory of a process of its own.',
          columns: ['', ''],
          rows: [
            ['engine: rows, tables and taps', `${digits(working)} MiB`],
            ['peak of bare Node', `${digits(bare)} MB`],
            ['peak of the build', `${digits(whole)} MB`],
            ['over bare Node', `${digits(over)} MB`],
            ['the source file', `${digits(file)} MB`],
          ],
        },
      ],
    };
  });
}

/** Peak resident memory of a process, in MB. */
async function peakOf(folder: string, args: readonly string[]): Promise<number> {
  const printed = await node(['--import', beside('peak.js'), ...args], folder, { XDG_CACHE_HOME: folder });
  return Number(printed.trim().split('\n').at(-1)) / 1e6;
}
