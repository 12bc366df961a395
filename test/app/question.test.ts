import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { Refusal } from '../../core/problem.ts';
import { PROTOCOL } from '../../core/protocol.ts';
import { readRequest, requestId } from '../../extension/app/proof/question.ts';
import { problemOf } from '../fixtures/refusal.ts';

const ask = (call: string, question: unknown = null) => ({ protocol: PROTOCOL, kind: 'ask', id: 7, call, question });

const good: readonly (readonly [call: string, question: unknown])[] = [
  ['open', null],
  ['firstPrint', { level: null, target: null }],
  ['firstPrint', { level: 3, target: null }],
  ['bytes', null],
  ['isBuilt', { use: 'image', level: null, target: '2x', pixels: '0'.repeat(64) }],
  ['build', null],
  ['reveal', null],
  ['report', null],
  ['adopt', { scope: 'file', settings: { kernel: { name: 'kaiser', alpha: 3 }, fill: null } }],
  ['adopt', { scope: 'matching', settings: {} }],
  ['showSettings', { key: null }],
  ['showSettings', { key: 'limits.over-budget' }],
  ['copy', { text: '' }],
  ['save', { name: 'leaf proof.png', bytes: new ArrayBuffer(3) }],
  ['export', { form: 'sheet', state: { version: 1, slots: [] } }],
  ['export', { form: 'page', state: {} }],
];

test.each(good)('%s with %o is understood', (call, question) => {
  const message = ask(call, question);
  expect(readRequest(message)).toEqual(message);
});

describe('what a page may not ask', () => {
  const ring: { self?: unknown } = {};
  ring.self = ring;

  test.each([
    ['nothing', null],
    ['a text', 'open'],
    ['another kind', { ...ask('open'), kind: 'reply' }],
    ['a call that is none', ask('constructor')],
    ['a call of the prototype', ask('toString')],
    ['no id', { ...ask('open'), id: undefined }],
    ['a broken id', { ...ask('open'), id: 0.5 }],
    ['a question where none is taken', ask('bytes', {})],
    ['a command to run for a report', ask('report', { command: 'workbench.action.quit' })],
    ['a stranger among the keys', { ...ask('open'), more: 1 }],
    ['a level that no texture has', ask('firstPrint', { level: 16, target: null })],
    ['a hash that is none', ask('isBuilt', { use: 'image', level: 0, target: null, pixels: 'f00' })],
    ['a use that is none', ask('isBuilt', { use: 'shine', level: 0, target: null, pixels: '0'.repeat(64) })],
    ['another scope', ask('adopt', { scope: 'all', settings: {} })],
    ['a list of settings', ask('adopt', { scope: 'file', settings: [] })],
    ['settings in a ring', ask('adopt', { scope: 'file', settings: ring })],
    ['settings beyond measure', ask('adopt', { scope: 'file', settings: { name: 'x'.repeat(2 ** 17) } })],
    ['a key with a slash', ask('showSettings', { key: '../x' })],
    ['a text that is none', ask('copy', { text: 1 })],
    ['a name that leads elsewhere', ask('save', { name: '../leaf.png', bytes: new ArrayBuffer(0) })],
    ['a name that hides', ask('save', { name: '.bashrc', bytes: new ArrayBuffer(0) })],
    ['a name with a line break', ask('save', { name: 'a\nb', bytes: new ArrayBuffer(0) })],
    ['another form', ask('export', { form: 'film', state: {} })],
    ['a state that is none', ask('export', { form: 'sheet', state: [] })],
    ['a state in a ring', ask('export', { form: 'page', state: ring })],
    ['a state beyond measure', ask('export', { form: 'page', state: { show: 'x'.repeat(2 ** 19) } })],
    ['bytes that are none', ask('save', { name: 'a.png', bytes: [1, 2] })],
  ])('%s', async (_, message) => {
    expect((await problemOf(() => readRequest(message)))?.code).toBe('bad-message');
  });

  test('another version of the protocol is told so', async () => {
    const problem = await problemOf(() => readRequest({ ...ask('open'), protocol: PROTOCOL + 1 }));
    expect(problem).toMatchObject({ code: 'page-outdated', values: { page: PROTOCOL + 1, host: PROTOCOL } });
  });

  test('anything at all ends in a request or a refusal', () => {
    fc.assert(
      fc.property(fc.anything(), fc.constantFrom(...good.map(([call]) => call)), (question, call) => {
        for (const message of [question, ask(call, question)]) {
          requestId(message);
          try {
            readRequest(message);
          } catch (error) {
            expect(error).toBeInstanceOf(Refusal);
          }
        }
      }),
    );
  });
});
