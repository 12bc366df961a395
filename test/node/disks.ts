import * as fs from 'node:fs';
import { type Disk, DiskError, type DiskFault } from '../../extension/node/files/disk.ts';
import { nodeDisk } from '../../extension/node/files/node-disk.ts';

/** Stands for the end of the process: nothing in the house catches it. */
export class Died extends Error {}

const changing = [
  'write',
  'writePieces',
  'flush',
  'rename',
  'remove',
  'makeFolder',
  'removeEmptyFolder',
  'flushFolder',
] as const;

type Change = (typeof changing)[number];

/** How far the last call gets: not at all, whole, or (a write) half. */
export type Ending = 'before' | 'half' | 'after';

/** A disk whose process ends at its k-th changing call, from 1; no later call does anything. */
export function dyingDisk(k: number, ending: Ending, base: Disk = nodeDisk): Disk {
  let calls = 0;
  return changed(base, async (name, args, act) => {
    calls++;
    if (calls > k) throw new Died();
    if (calls < k) return act();
    if (ending === 'after') await act();
    if (ending === 'half' && name === 'write') {
      const bytes = args[1] as Uint8Array;
      fs.writeFileSync(args[0] as string, bytes.subarray(0, bytes.length >> 1));
    }
    throw new Died();
  });
}

/** A disk that lists the changing calls made to it. */
export function countingDisk(calls: string[], base: Disk = nodeDisk): Disk {
  return changed(base, (name, args, act) => {
    calls.push(`${name} ${args[0]}`);
    return act();
  });
}

/** A disk on which some calls fail. `faultOf` answers the fault for a call, if it has one. */
export function faultyDisk(
  faultOf: (name: Change, path: string, bytes: number) => DiskFault | null,
  base: Disk = nodeDisk,
): Disk {
  return changed(base, async (name, args, act) => {
    const path = args[name === 'rename' ? 1 : 0] as string;
    const fault = faultOf(name, path, name === 'write' ? (args[1] as Uint8Array).length : 0);
    if (fault !== null) throw new DiskError(fault, path, `a test says ${fault}`);
    return act();
  });
}

function changed(
  base: Disk,
  around: (name: Change, args: readonly unknown[], act: () => Promise<unknown>) => Promise<unknown>,
): Disk {
  const wrapped = Object.fromEntries(
    changing.map((name) => {
      const method = base[name] as (...args: unknown[]) => Promise<unknown>;
      return [name, (...args: unknown[]) => around(name, args, () => method.apply(base, args))];
    }),
  );
  return { ...base, ...wrapped };
}
