import * as vscode from 'vscode';
import type { Problem } from '../../../core/problem.ts';
import { isOnDisk } from '../files/place.ts';
import type { DiskDoor, Platform } from '../platform.ts';

/** The door to a resource's disk, or why there is none for this kind of work. */
export function doorFor(
  work: 'reads' | 'writes',
  resource: vscode.Uri | undefined,
  platform: Platform,
): { readonly door: DiskDoor } | { readonly problem: Problem } {
  const place = { severity: 'error', values: {}, ...(resource === undefined ? {} : { path: resource.path }) } as const;
  if (platform.disk === null || (resource !== undefined && !isOnDisk(resource, platform))) {
    return { problem: { code: 'no-disk', ...place } };
  }
  if (work === 'writes' && !vscode.workspace.isTrusted) return { problem: { code: 'untrusted', ...place } };
  return { door: platform.disk };
}
