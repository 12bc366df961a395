import { copyFileSync, mkdirSync } from 'node:fs';
import { join } from 'node:path';
import { top } from '../house/tree.ts';

/** A folder of two textures and no settings. */
export function makeWorkspace(folder: string): string {
  mkdirSync(folder, { recursive: true });
  copyFileSync(join(top, 'test', 'demo', 'foliage', 'alder-twig.png'), join(folder, 'leaf.png'));
  copyFileSync(join(top, 'test', 'demo', 'sprites', 'wick.png'), join(folder, 'icon.png'));
  return folder;
}
