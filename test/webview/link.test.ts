import { expect, test } from 'vitest';
import { type HostCalls, type HostEvent, PROTOCOL } from '../../core/protocol.ts';
import { openHostLink, type VsCodeApi } from '../../webview/link/host.ts';

function opened() {
  const posted: { id: number; call: string }[] = [];
  let state: unknown;
  const api: VsCodeApi = {
    postMessage: (message) => void posted.push(message as { id: number; call: string }),
    getState: () => state,
    setState: (next) => {
      state = next;
    },
  };
  const window = new EventTarget();
  const link = openHostLink<HostCalls, HostEvent>(api, window, ['source', 'settings', 'built']);
  const tell = (data: unknown) => window.dispatchEvent(new MessageEvent('message', { data }));
  return { link, posted, tell };
}

test('replies find their question, in any order', async () => {
  const { link, posted, tell } = opened();
  const one = link.ask('reveal', null);
  const other = link.ask('build', null);
  expect(posted.map(({ call }) => call)).toEqual(['reveal', 'build']);
  const reply = { ok: { built: 1, unchanged: 0, failed: 0 } };
  tell({ protocol: PROTOCOL, kind: 'reply', id: posted[1].id, revision: 4, reply });
  tell({ protocol: PROTOCOL, kind: 'reply', id: posted[0].id, revision: 5, reply: { ok: {} } });
  expect(await other).toEqual({ revision: 4, reply });
  expect((await one).revision).toBe(5);
});

test('a page that goes away leaves no question hanging', async () => {
  const { link, posted } = opened();
  const pending = link.ask('bytes', null);
  link.close();
  expect((await pending).reply).toMatchObject({ problem: { code: 'unexpected' } });
  expect((await link.ask('open', null)).reply).toHaveProperty('problem');
  expect(posted).toHaveLength(1);
});

test('a message that cannot be posted is a problem, not an exception', async () => {
  const link = openHostLink<HostCalls, HostEvent>(
    {
      postMessage: () => {
        throw new Error('could not be cloned');
      },
      getState: () => undefined,
      setState: () => {},
    },
    new EventTarget(),
    [],
  );
  expect((await link.ask('open', null)).reply).toMatchObject({
    problem: { values: { reason: 'could not be cloned' } },
  });
});

test('events are told; messages of another protocol or shape are not', () => {
  const { link, tell } = opened();
  const seen: string[] = [];
  link.listen((event) => seen.push(event.kind));
  tell({ protocol: PROTOCOL, kind: 'source', revision: 2, present: true });
  tell({ protocol: PROTOCOL + 1, kind: 'source', revision: 2, present: true });
  tell({ protocol: PROTOCOL, kind: 'no-such-kind' });
  tell('source');
  tell(null);
  expect(seen).toEqual(['source']);
});

test('what is kept comes back, null at first', () => {
  const { link } = opened();
  expect(link.kept()).toBeNull();
  link.keep({ zoom: 4 });
  expect(link.kept()).toEqual({ zoom: 4 });
});
