import { expect, test } from 'vitest';
import { encodePng } from '../../core/codec/png/encode.ts';
import { Desk } from '../../core/proof/desk.ts';
import type { FromBench, Want } from '../../core/proof/want.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash as nodeHash } from '../../extension/node/ports/hash.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { newHash } from '../../webview/worker/hash.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { both, treatment } from '../fixtures/treatment.ts';

async function opened() {
  const posted: FromBench[] = [];
  const waiting: (() => void)[] = [];
  const pause = () => new Promise<void>((resolve) => setTimeout(resolve, 0));
  const desk = new Desk(
    { inflate, newHash, pause },
    {
      slow: null,
      post: (message) => {
        posted.push(message);
        for (const each of waiting.splice(0)) each();
      },
    },
  );
  const told = async (count: number) => {
    while (posted.length < count) await new Promise<void>((resolve) => waiting.push(resolve));
    return posted;
  };
  const raster = noiseRaster(1, { width: 256, height: 2048 }, 3, 8, 'noise');
  const file = await encodePng(raster, deflate);
  const bytes = file.buffer.slice(file.byteOffset, file.byteOffset + file.byteLength) as ArrayBuffer;
  return { desk, told, bytes };
}

const print = (name: string): { key: string; want: Want } => ({
  key: name,
  want: { kind: 'print', treatment: treatment({ kernel: both(name) }), image: { level: 1 } },
});

test('the newest list is worked on; what it does not want any more is not answered', async () => {
  const { desk, told, bytes } = await opened();
  desk.take({ kind: 'open', revision: 1, name: 'a.png', bytes, roughness: null });
  await told(1);
  desk.take({ kind: 'want', revision: 1, wants: [print('lanczos3'), print('kaiser')] });
  await new Promise((resolve) => setTimeout(resolve, 0));
  desk.take({ kind: 'want', revision: 1, wants: [print('box'), print('triangle')] });
  const messages = await told(3);
  expect(messages.map((each) => (each.kind === 'answer' ? each.key : each.kind))).toEqual([
    'opened',
    'box',
    'triangle',
  ]);
});

test('what is being worked on goes on where it is still wanted, and is answered once', async () => {
  const { desk, told, bytes } = await opened();
  desk.take({ kind: 'open', revision: 1, name: 'a.png', bytes, roughness: null });
  await told(1);
  desk.take({ kind: 'want', revision: 1, wants: [print('lanczos3')] });
  await new Promise((resolve) => setTimeout(resolve, 0));
  desk.take({ kind: 'want', revision: 1, wants: [print('lanczos3'), print('box')] });
  const messages = await told(3);
  expect(messages.flatMap((each) => (each.kind === 'answer' ? [each.key] : []))).toEqual(['lanczos3', 'box']);
});

test('a file that cannot be read is a problem without a key, a want that cannot be met one with it', async () => {
  const { desk, told, bytes } = await opened();
  desk.take({ kind: 'open', revision: 1, name: 'a.png', bytes: bytes.slice(0, 100), roughness: null });
  expect((await told(1))[0]).toMatchObject({ kind: 'problem', key: null, problem: { code: 'png-file-truncated' } });
  desk.take({ kind: 'open', revision: 2, name: 'a.png', bytes, roughness: null });
  desk.take({ kind: 'want', revision: 2, wants: [print('epx')] });
  expect((await told(3))[2]).toMatchObject({ kind: 'problem', key: 'epx', problem: { code: 'kernel-cannot' } });
});

test('messages of an older revision are passed over', async () => {
  const { desk, told, bytes } = await opened();
  desk.take({ kind: 'open', revision: 5, name: 'a.png', bytes, roughness: null });
  desk.take({ kind: 'open', revision: 4, name: 'a.png', bytes: new ArrayBuffer(3), roughness: null });
  expect((await told(1))[0]).toMatchObject({ kind: 'opened', revision: 5 });
});

test('SHA-256 of the page is SHA-256 of the build', () => {
  const [one, other] = [newHash(), nodeHash()];
  for (const piece of [Uint8Array.of(1, 2, 3), new Uint8Array(0), new Uint8Array(5000).fill(7)]) {
    one.update(piece);
    other.update(piece);
  }
  expect(one.hex()).toBe(other.hex());
});
