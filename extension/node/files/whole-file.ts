import type { Disk } from './disk.ts';
import { orRefuse, pause, replaceFile } from './laydown.ts';
import { parentOf } from './path.ts';
import { temporaryFor } from './temporary.ts';

/** Writes one file so that it is at every moment wholly old or wholly new, and makes the folder that it goes into. Throws
 *  Refusal. */
export async function writeWhole(disk: Disk, path: string, bytes: Uint8Array): Promise<void> {
  const temporary = temporaryFor(path);
  await orRefuse(path, bytes.length, async () => {
    await disk.makeFolder(parentOf(path));
    await disk.write(temporary, bytes);
    await disk.flush([temporary]);
  });
  try {
    await replaceFile(disk, { from: temporary, to: path, named: path }, pause);
  } catch (error) {
    await disk.remove(temporary);
    throw error;
  }
  await disk.flushFolder(parentOf(path));
}
