import { createHash } from 'node:crypto';
import { deflateSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { compressions } from '../../core/codec/compression.ts';
import { deflateRuns } from '../../core/codec/deflate/stream.ts';
import { encoderFingerprint, makeSample } from '../../core/codec/encoder.ts';
import type { Deflate } from '../../core/port.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { simdTokens } from '../fixtures/simd.ts';

describe('the sample', () => {
  const sample = makeSample();

  test('never moves', () => {
    // A moved sample would make every manifest's encoder differ for nothing.
    expect(createHash('sha256').update(sample).digest('hex')).toBe(
      '1e17f27accb72f4d635ba9054ed09c4c5f96071f280b2dc955f10f6d51658728',
    );
    expect(sample.length).toBe(256 * 1024);
  });

  test('is half noise that packs by its uneven bytes, and half tiles that pack by the matches within reach', () => {
    const share = (half: Uint8Array, hints: keyof typeof compressions) =>
      deflateSync(half, { level: compressions[hints].level }).length / half.length;
    const noise = share(sample.subarray(0, 128 * 1024), 'labels');
    expect(noise).toBeGreaterThan(0.5);
    expect(noise).toBeLessThan(0.95);
    expect(share(sample.subarray(128 * 1024), 'labels')).toBeLessThan(0.6);
  });
});

describe('the fingerprint', () => {
  test('is SHA-256 over the sample deflated in every way in use, our own last', async () => {
    const hash = createHash('sha256');
    for (const hints of Object.values(compressions)) {
      for await (const piece of deflate([makeSample()], hints)) hash.update(piece);
    }
    for (const piece of deflateRuns([makeSample()])) hash.update(piece);
    expect(await encoderFingerprint({ deflate, newHash })).toBe(hash.digest('hex'));
  });

  test('does not hang on how the port cuts its pieces, nor on who finds the tokens', async () => {
    const whole: Deflate = async function* (pieces, hints) {
      const parts: Uint8Array[] = [];
      for await (const piece of deflate(pieces, hints)) parts.push(piece);
      yield Buffer.concat(parts);
    };
    expect(await encoderFingerprint({ deflate: whole, newHash, tokens: simdTokens() })).toBe(
      await encoderFingerprint({ deflate, newHash }),
    );
  });

  test.each(['labels', 'repeating'] as const)('tells a port that is different for %s alone', async (name) => {
    const other: Deflate = (pieces, hints) =>
      deflate(pieces, hints === compressions[name] ? { level: hints.level === 1 ? 2 : 1 } : hints);
    expect(await encoderFingerprint({ deflate: other, newHash })).not.toBe(
      await encoderFingerprint({ deflate, newHash }),
    );
  });

  test('tells a port that ignores the hints', async () => {
    const deaf: Deflate = (pieces) => deflate(pieces, { level: 6 });
    expect(await encoderFingerprint({ deflate: deaf, newHash })).not.toBe(
      await encoderFingerprint({ deflate, newHash }),
    );
  });
});
