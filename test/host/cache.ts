import { existsSync, mkdirSync, mkdtempSync, renameSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { cacheFolder } from '../../extension/node/project/stat-index.ts';

/** A folder of the user's cache, made once and whole: `make` fills an empty one, which then takes its place. */
export async function cached(name: string, make: (folder: string) => Promise<void>): Promise<string> {
  const cache = cacheFolder(process.env, process.platform);
  if (cache === null) throw new Error('Expected a folder for caches: set HOME, or XDG_CACHE_HOME.');
  const hosts = join(cache, 'test-hosts');
  const folder = join(hosts, name);
  if (existsSync(folder)) return folder;
  mkdirSync(hosts, { recursive: true });
  const fresh = mkdtempSync(join(hosts, '.new-'));
  try {
    await make(fresh);
    // Another run may have been faster; either is as good.
    if (!existsSync(folder)) renameSync(fresh, folder);
  } finally {
    rmSync(fresh, { recursive: true, force: true });
  }
  return folder;
}
