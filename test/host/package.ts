import { createHash } from 'node:crypto';
import { readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { run, runNpm } from './process.ts';

/** A package as npm has it. `integrity` is its dist.integrity. */
export interface Pinned {
  readonly name: string;
  readonly version: string;
  readonly integrity: string;
}

/** Unpacks one folder of a package into `target`, which exists. */
export async function unpackPackage(
  { name, version, integrity }: Pinned,
  inside: string,
  target: string,
): Promise<void> {
  const packed = await runNpm(['pack', `${name}@${version}`, '--silent', '--pack-destination', target], target);
  const tarball = join(target, packed.trim().split('\n').at(-1) as string);
  const found = `sha512-${createHash('sha512').update(readFileSync(tarball)).digest('base64')}`;
  if (found !== integrity) throw new Error(`Expected ${integrity} for ${name}@${version} but received ${found}`);
  const path = join('package', inside).replaceAll('\\', '/');
  const depth = path.split('/').filter((part) => part !== '' && part !== '.').length;
  await run('tar', ['xzf', tarball, '-C', target, `--strip-components=${depth}`, path], target);
  rmSync(tarball);
}
