import { expect, test } from 'vitest';
import { largePng } from '../fixtures/large.ts';
import { newFolder } from '../node/folder.ts';
import { settingsText } from '../node/project.ts';
import { sizeproof } from './cli.ts';

/** What the system lets the process allocate, in KiB: room for one of the textures below beside Node, not for three. */
const LIMIT_KIB = 350_000;

const side = 4096;
const textures = ['a.png', 'b.png', 'c.png'];

// RLIMIT_DATA counts every private writable mapping, and only Linux does so.
test.skipIf(process.platform !== 'linux')(
  'under a hard limit of memory a bounded build goes through, and an unbounded one does not',
  async () => {
    const png = largePng(side);
    const settings = settingsText({ defaults: { kernel: 'box', alpha: { use: 'none' }, outputs: ['ktx2'] } });
    const folder = newFolder({
      'sizeproof.json': settings,
      ...Object.fromEntries(textures.map((name) => [name, png])),
    });
    const before = ['/bin/sh', '-c', `ulimit -d ${LIMIT_KIB}; exec "$@"`, 'limited'];
    const build = (...options: string[]) =>
      sizeproof(['build', '.', '--jobs', '3', '--out', 'out', '--json', ...options], { folder, before });
    const refused = await sizeproof(['build', 'a.png', '--memory', '8MiB', '--json'], { folder });
    const { bytes } = JSON.parse(refused.stdout).problems[0].values;
    const unbounded = await build('--memory', '64GiB');
    expect(unbounded.code).not.toBe(0);
    const bounded = await build('--memory', String(Math.floor(bytes * 1.1)));
    expect(bounded).toMatchObject({ code: 0, stderr: '' });
  },
  300_000,
);
