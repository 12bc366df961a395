import { describe, expect, test } from 'vitest';
import { levelCount } from '../../core/chain/levels.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { build } from '../fixtures/built.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { openTestData } from '../fixtures/testdata.ts';

const suite = openTestData('pngsuite');
const { treatment } = resolveTreatment(null, 'a.png');

/** Files whose name begins with x are corrupt on purpose. [PngSuite, Willem van Schaik, 2017jul19] */
const isCorrupt = (name: string): boolean => name.startsWith('x');

describe.skipIf(suite === null)('PngSuite through the whole build', () => {
  const names = suite?.names ?? [];

  test('every valid file becomes a whole chain', async () => {
    const valid = names.filter((name) => !isCorrupt(name));
    expect(valid).toHaveLength(162);
    for (const name of valid) {
      const { manifest, files } = await build(suite!.read(name), treatment);
      const [width, height] = manifest.sources[0].extent;
      expect(manifest.levels.length, name).toBe(levelCount({ width, height }));
      // A PNG for each level but 0, which is the source, and one KTX2; 16-bit files are linear light in it.
      expect(files.size, name).toBe(manifest.levels.length);
      expect(manifest.levels[0].pixels, name).toBe(manifest.sources[0].pixels);
    }
  });

  test('every corrupt file is refused in words, and nothing is written', async () => {
    const corrupt = names.filter(isCorrupt);
    expect(corrupt).toHaveLength(14);
    for (const name of corrupt) {
      let written = 0;
      const write = async (): Promise<void> => {
        written++;
      };
      const problem = await problemOf(() => build(suite!.read(name), treatment, { write }));
      expect(problem?.code, name).toMatch(/^png-/);
      expect(written, name).toBe(0);
    }
  });
});
