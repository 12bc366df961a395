import * as vscode from 'vscode';
import type { Preferences } from '../../../core/protocol.ts';

/** The extension's own settings, each checked: a value that does not fit counts as not given. */
export interface Configuration {
  readonly buildOnSave: 'off' | 'settings' | 'sources';
  /** Null leaves it to the machine. */
  readonly jobs: number | null;
  readonly memoryBytes: number | null;
  readonly preferences: Preferences;
}

export function readConfiguration(resource: vscode.Uri | undefined): Configuration {
  const settings = vscode.workspace.getConfiguration('sizeproof', resource);
  const jobs = settings.get<unknown>('jobs');
  const memory = settings.get<unknown>('memory');
  return {
    buildOnSave: choose(settings.get('buildOnSave'), ['off', 'settings', 'sources']),
    jobs: inside(jobs, 1, 256) ? Math.floor(jobs) : null,
    memoryBytes: inside(memory, 1, 2 ** 20) ? Math.floor(memory * MEBIBYTE) : null,
    preferences: {
      backdrop: choose(settings.get('backdrop'), ['checker', 'black', 'white', 'gray']),
      fovY: within(settings.get('view.fovY'), 1, 179, 60),
      screenHeight: Math.round(within(settings.get('view.screenHeight'), 1, 65536, 1080)),
      swapDwell: Math.round(within(settings.get('swapDwell'), LEAST_DWELL, 10_000, LEAST_DWELL)),
    },
  };
}

const MEBIBYTE = 2 ** 20;

/** Three swaps a second at most: faster general flashing may harm. [WCAG22, 2.3.1] */
const LEAST_DWELL = 333;

/** The first choice is the default. */
function choose<T extends string>(value: unknown, choices: readonly T[]): T {
  return choices.find((each) => each === value) ?? choices[0];
}

function inside(value: unknown, least: number, most: number): value is number {
  return typeof value === 'number' && value >= least && value <= most;
}

function within(value: unknown, least: number, most: number, standard: number): number {
  return inside(value, least, most) ? value : standard;
}
