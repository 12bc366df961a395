import { afterEach, beforeEach, expect, test, vi } from 'vitest';
import { treatmentOf } from '../../core/proof/slot.ts';
import { readState, startState, writeState } from '../../webview/page/state/state.ts';
import { LEAST_DWELL, SwapHold } from '../../webview/page/state/swap-hold.ts';
import { adoptable, tidied } from '../../webview/page/treatment/change.ts';
import { setWords, t } from '../../webview/page/words/t.ts';
import { kernel, treatment } from '../fixtures/treatment.ts';

beforeEach(() => {
  vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout', 'performance'] });
});
afterEach(() => {
  vi.useRealTimers();
});

test('what is kept comes back; what is not understood does not', () => {
  const state = { ...startState, zoom: 8, show: 'lit' as const };
  expect(readState(structuredClone(writeState(state)))).toEqual(state);
  for (const kept of [null, undefined, 7, {}, { version: 99, zoom: 3 }]) expect(readState(kept)).toEqual(startState);
  expect(readState({ version: 1, slots: [{ id: 4, kernel: kernel('box'), change: {} }] }).slots).toEqual(
    startState.slots,
  );
});

test('a print is the settings, its kernel and its changes', () => {
  const settings = treatment({ kernel: { minify: kernel('kaiser'), magnify: kernel('epx') } });
  const slot = { id: 1, kernel: kernel('majority'), change: { light: 'code', wrap: 'repeat' } } as const;
  expect(treatmentOf(slot, settings, [])).toEqual({
    ...settings,
    light: 'code',
    wrap: { x: 'repeat', y: 'repeat' },
    kernel: { minify: kernel('majority'), magnify: kernel('epx') },
    derive: 'base',
  });
  const said = [{ key: 'derive', value: 'previous', rule: 'defaults' }];
  expect(treatmentOf(slot, settings, said).derive).toBe('previous');
  expect(treatmentOf({ id: 0, kernel: null, change: {} }, settings, [])).toEqual(settings);
});

test('what is adopted is what differs, as a settings file spells it', () => {
  const change = { weight: false, keepCoverage: true, renormalise: true } as const;
  expect(adoptable({ id: 1, kernel: kernel('mitchell', { b: 0, c: 0.5 }), change })).toEqual({
    kernel: { name: 'mitchell', b: 0, c: 0.5 },
    alpha: { weight: false, keepCoverage: true },
    normal: { base: 'renormalise' },
  });
  expect(adoptable({ id: 1, kernel: kernel('box'), change: {} })).toEqual({ kernel: 'box' });
  expect(tidied({ light: 'linear', wrap: 'repeat' }, treatment())).toEqual({ wrap: 'repeat' });
});

test('swaps follow the hand, and each other no sooner than a third of a second', () => {
  const seen: [boolean, number][] = [];
  const start = performance.now();
  const hold = new SwapHold((swapped) => seen.push([swapped, performance.now() - start]));
  hold.press('down', 0);
  vi.advanceTimersByTime(20);
  hold.press('up', 0);
  hold.press('down', 0);
  hold.press('up', 0);
  vi.advanceTimersByTime(2000);
  expect(seen).toEqual([
    [true, 0],
    [false, LEAST_DWELL],
  ]);
});

test('words are translated by their English text and filled in', () => {
  expect(t('level {level}', { level: 3 })).toBe('level 3');
  setWords({ 'level {level}': 'Stufe {level}' });
  expect(t('level {level}', { level: 3 })).toBe('Stufe 3');
  setWords({});
  expect(t('{missing} stays')).toBe('{missing} stays');
});
