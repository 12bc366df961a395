import { describe, expect, test } from 'vitest';
import { refuse } from '../../core/problem.ts';
import { type HostCalls, type HostEvent, PROTOCOL, type Response } from '../../core/protocol.ts';
import { type Answers, Channel } from '../../extension/app/proof/channel.ts';
import { readRequest } from '../../extension/app/proof/question.ts';

/** A page's end of a line: what was posted to it, and a way to ask. */
function openLine(answers: Partial<Answers<HostCalls>>) {
  const posted: unknown[] = [];
  const reported: unknown[] = [];
  let take: (message: unknown) => void = () => undefined;
  const webview = {
    onDidReceiveMessage(listener: (message: unknown) => void) {
      take = listener;
      return {
        dispose() {
          take = () => undefined;
        },
      };
    },
    async postMessage(message: unknown) {
      posted.push(message);
      return true;
    },
  };
  let revision = 0;
  const channel = new Channel<HostCalls, HostEvent>(webview as never, {
    read: readRequest,
    answers: answers as Answers<HostCalls>,
    revision: () => revision,
    report: (error) => reported.push(error),
  });
  return {
    channel,
    posted: posted as Response[],
    reported,
    say: (message: unknown) => take(message),
    ask: (id: number, call: string, question: unknown = null) =>
      take({ protocol: PROTOCOL, kind: 'ask', id, call, question }),
    setRevision(now: number) {
      revision = now;
    },
  };
}

const turn = () => new Promise((resolve) => setImmediate(resolve));

describe('a channel', () => {
  test('answers under the question’s id, with the revision at the time of the answer', async () => {
    let finish: (path: string) => void = () => undefined;
    const line = openLine({ adopt: () => new Promise((resolve) => (finish = (path) => resolve({ path }))) });
    line.ask(3, 'adopt', { scope: 'file', settings: {} });
    await turn();
    expect(line.channel.pending).toBe(1);
    line.setRevision(9);
    finish('sizeproof.json');
    await turn();
    const reply = { ok: { path: 'sizeproof.json' } };
    expect(line.posted).toEqual([{ protocol: PROTOCOL, kind: 'reply', id: 3, revision: 9, reply }]);
    expect(line.channel.pending).toBe(0);
  });

  test('hands a refusal on as it is, and any other failure as `unexpected`, which it reports', async () => {
    const line = openLine({
      build: async () => refuse('untrusted', {}),
      reveal: async () => {
        throw new TypeError('no such thing');
      },
    });
    line.ask(1, 'build');
    line.ask(2, 'reveal');
    await turn();
    expect(line.posted.map(({ id, reply }) => [id, 'problem' in reply && reply.problem.code])).toEqual([
      [1, 'untrusted'],
      [2, 'unexpected'],
    ]);
    expect(line.reported).toHaveLength(1);
  });

  test('answers what it does not understand, where there is an id to answer under', async () => {
    const line = openLine({});
    line.say({ protocol: PROTOCOL, kind: 'ask', id: 4, call: 'format', question: null });
    line.say('noise');
    await turn();
    expect(line.posted.map(({ id, reply }) => [id, 'problem' in reply && reply.problem.code])).toEqual([
      [4, 'bad-message'],
    ]);
    expect(line.reported).toHaveLength(1);
  });

  test('says nothing more once it is disposed, whatever was under way', async () => {
    let finish: () => void = () => undefined;
    const line = openLine({ copy: () => new Promise((resolve) => (finish = () => resolve({}))) });
    line.ask(1, 'copy', { text: 'x' });
    await turn();
    line.channel.dispose();
    finish();
    line.ask(2, 'copy', { text: 'y' });
    line.channel.tell({ protocol: PROTOCOL, kind: 'source', revision: 1, present: true });
    await turn();
    expect(line.posted).toEqual([]);
    expect(line.channel.pending).toBe(0);
  });
});
