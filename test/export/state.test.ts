import { describe, expect, test } from 'vitest';
import { stateAt } from '../../core/export/at.ts';
import { readLook } from '../../core/export/look.ts';
import { startPreferences } from '../../core/export/order.ts';
import { OWN_SLOT, STATE_VERSION } from '../../core/proof/slot.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { readState, startState, writeState } from '../../webview/page/state/state.ts';
import { problemOf } from '../fixtures/refusal.ts';

const { settings } = parseSettings(
  '{ "defaults": { "targets": ["2x", { "name": "badge", "extent": [24, 24] }] } }',
  'a.json',
);
const { treatment } = resolveTreatment(settings, 'a.png');
const none = { at: null, kernels: null };

test('what a page keeps at its start is what a sheet begins with', () => {
  const kept = writeState(startState);
  expect(kept.version).toBe(STATE_VERSION);
  expect(readLook(kept, startPreferences)).toEqual(readLook(null, startPreferences));
});

describe('a command line that says where', () => {
  test.each([
    ['3', { kind: 'level', level: 3 }, []],
    ['badge', { kind: 'target', name: 'badge' }, []],
    ['2x', { kind: 'target', name: '2x' }, []],
    ['0.5x', { kind: 'target', name: '0.5x' }, [{ name: '0.5x', scale: 0.5 }]],
    ['48x32', { kind: 'target', name: '48x32' }, [{ name: '48x32', extent: [48, 32] }]],
  ])('%s', (at, sight, typed) => {
    const state = stateAt({ ...none, at }, treatment);
    expect(readLook(state, startPreferences)).toMatchObject({ sight, typed });
    // The page of the same export opens there too.
    expect(readState(state)).toMatchObject({ sight, typed, slots: [OWN_SLOT] });
  });

  test.each(['15', 'hedge', '0x', '99x', '20000x2', ''])('%j is no target', async (at) => {
    expect(await problemOf(() => stateAt({ ...none, at }, treatment))).toMatchObject({
      code: 'no-such-target',
      values: { given: at, known: '2x, badge' },
    });
  });

  test('and nothing, where it says nothing', () => {
    expect(stateAt(none, treatment)).toBeNull();
  });

  test('kernels stand behind the settings’ own', () => {
    const kernels = [{ name: 'box', params: {} }];
    expect(readLook(stateAt({ at: null, kernels }, treatment), startPreferences).slots).toEqual([
      OWN_SLOT,
      { id: 1, kernel: kernels[0], change: {} },
    ]);
  });
});
