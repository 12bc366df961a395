import { describe, expect, it } from 'vitest';
import { planTexture } from '../../core/build/plan.ts';
import { factsOf } from '../../core/build/source.ts';
import { buildTexture } from '../../core/build/texture.ts';
import { openImage } from '../../core/codec/open.ts';
import type { Cancel, Ports } from '../../core/port.ts';
import { Cancelled } from '../../core/port.ts';
import { nodePorts } from '../../extension/node/ports/ports.ts';
import { build, pngOf } from '../fixtures/built.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { treatment } from '../fixtures/treatment.ts';

const normals = noiseRaster(1, { width: 8, height: 6 }, 3, 8, 'noise');
const rough = noiseRaster(2, { width: 8, height: 6 }, 1, 8, 'noise');
const one = treatment({
  content: 'normal',
  normal: { roughness: { path: 'r.png', channel: 'r' } },
  targets: [{ name: '2x', scale: 2 }],
});

describe('a build that is cancelled', () => {
  it('throws Cancelled, wherever it is when it notices', async () => {
    // Every look at the flag is a point: cancelled from the n-th look on, for each n there is.
    const looks = await looksUntilDone(Number.POSITIVE_INFINITY);
    expect(looks.kind).toBe('built');
    // Rows of both sources, files, and the end.
    expect(looks.count).toBeGreaterThan(6 + 6 + 10);
    for (let from = 1; from <= looks.count; from++) {
      expect([from, (await looksUntilDone(from)).kind]).toEqual([from, 'cancelled']);
    }
  });

  it('hands over no file after it was cancelled, and no manifest even if that was the last', async () => {
    const whole = await build(pngOf(normals), one, { roughness: pngOf(rough) });
    for (let last = 1; last <= whole.files.size; last++) {
      const cancel = { cancelled: false };
      const written: string[] = [];
      const building = build(pngOf(normals), one, {
        roughness: pngOf(rough),
        cancel,
        write: async ({ path }) => {
          written.push(path);
          if (written.length === last) cancel.cancelled = true;
        },
      });
      await expect(building).rejects.toThrow(Cancelled);
      expect(written).toEqual([...whole.files.keys()].slice(0, last));
    }
  });

  it('before it begins decodes no row', async () => {
    const cancelled = build(pngOf(normals), treatment({ content: 'normal' }), { cancel: { cancelled: true } });
    await expect(cancelled).rejects.toThrow(Cancelled);
  });

  it('is not mistaken for one whose writer failed', async () => {
    const write = async (): Promise<void> => {
      throw new Error('no room');
    };
    await expect(build(pngOf(normals), treatment({ content: 'normal' }), { write })).rejects.toThrow('no room');
  });
});

describe('a build that would hold too much', () => {
  it('is refused with both numbers before anything is inflated', async () => {
    const bytes = pngOf(normals);
    let inflated = 0;
    const ports: Ports = {
      ...nodePorts,
      inflate: (pieces, limit) => {
        inflated++;
        return nodePorts.inflate(pieces, limit);
      },
    };
    const plain = treatment({ content: 'normal' });
    const { peakBytes } = planTexture(
      'a.png',
      factsOf(openImage(bytes, 'a.png', nodePorts.inflate), bytes.length),
      plain,
    );
    const job = (memoryBytes: number): Parameters<typeof buildTexture>[0] => ({
      texture: 'a.png',
      image: { bytes, reference: 'a.png' },
      treatment: plain,
      memoryBytes,
    });
    const written: string[] = [];
    const run = (memoryBytes: number) =>
      buildTexture(job(memoryBytes), ports, { cancelled: false }, async ({ path }) => {
        written.push(path);
      });
    expect(await problemOf(() => run(peakBytes - 1))).toMatchObject({
      code: 'too-much-memory',
      values: { bytes: peakBytes, limit: peakBytes - 1 },
    });
    expect([inflated, written]).toEqual([0, []]);
    expect(await problemOf(() => run(peakBytes))).toBeNull();
    expect(inflated).toBe(1);
  });
});

async function looksUntilDone(cancelledFrom: number): Promise<{ kind: 'built' | 'cancelled'; count: number }> {
  let count = 0;
  const cancel: Cancel = {
    get cancelled() {
      return ++count >= cancelledFrom;
    },
  };
  try {
    await build(pngOf(normals), one, { roughness: pngOf(rough), cancel });
    return { kind: 'built', count };
  } catch (error) {
    if (!(error instanceof Cancelled)) throw error;
    return { kind: 'cancelled', count };
  }
}
