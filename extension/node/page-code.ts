import { readFileSync } from 'node:fs';
import type { PageCode } from '../../core/export/document.ts';

/** The built page's code, from the folder that holds it. */
export function readPageCode(folder: URL): PageCode {
  const read = (name: string): string => readFileSync(new URL(name, folder), 'utf8');
  return { script: read('page.js'), worker: read('worker.js'), style: read('page.css') };
}
