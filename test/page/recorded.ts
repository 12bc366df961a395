import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Problem } from '../../core/problem.ts';
import { type BuiltState, type OpenReply, PROTOCOL } from '../../core/protocol.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { top } from '../house/tree.ts';

/** What a host would answer: a recording that a page is played with. */
export interface Recording {
  readonly open: OpenReply | { readonly problem: Problem };
  readonly bytes: Uint8Array;
  /** Shown in place of bytes where the file cannot be read. */
  readonly bytesProblem?: Problem;
  /** What the page kept before. */
  readonly kept?: unknown;
}

const demo = join(top, 'test/demo');

/** A texture of the demo project with its own settings. */
export function recordDemo(path: string, rest: Partial<OpenReply> = {}, kept?: unknown): Recording {
  const { settings } = parseSettings(readFileSync(join(demo, 'sizeproof.json'), 'utf8'), 'sizeproof.json');
  const { treatment, origins } = resolveTreatment(settings, path);
  const rules = settings!.rules.filter((rule) => rule.match !== null && rule.hits(path));
  const last = rules[rules.length - 1];
  const matching = last === undefined ? null : { index: rules.length - 1, globs: last.match!, textures: 12 };
  const settingsReply = { file: 'sizeproof.json', treatment, origins, problems: [], matching };
  return record(readFileSync(join(demo, path)), path, { settings: settingsReply, ...rest }, kept);
}

/** Any bytes under a name, with built-in settings unless they are given. */
export function record(bytes: Uint8Array, path: string, rest: Partial<OpenReply> = {}, kept?: unknown): Recording {
  const { treatment, origins } = resolveTreatment(null, path);
  const open: OpenReply = {
    name: path.slice(path.lastIndexOf('/') + 1),
    path,
    byteCount: bytes.length,
    settings: { file: null, treatment, origins, problems: [], matching: null },
    state: { kind: 'not-built' },
    abilities: { build: true, adopt: true, reveal: true, settings: true, export: true },
    preferences: { backdrop: 'checker', fovY: 60, screenHeight: 1080, swapDwell: 333 },
    words: {},
    remark: null,
    ...rest,
  };
  return { open, bytes, ...(kept !== undefined && { kept }) };
}

export const stale: BuiltState = { kind: 'stale', moved: ['settings'], images: [] };

/** Runs in the page before its script: stands in for VS Code and answers from the recording. Every request is kept in
 *  `window.asked`. */
export function playRecording(data: {
  readonly protocol: number;
  readonly open: unknown;
  readonly bytes: string | null;
  readonly bytesProblem: unknown;
  readonly kept: unknown;
}): void {
  const stage = window as unknown as {
    acquireVsCodeApi: () => unknown;
    asked: { call: string; question: unknown }[];
    kept: unknown;
    violations: string[];
    longTasks: number[];
  };
  stage.asked = [];
  stage.kept = data.kept ?? undefined;
  stage.violations = [];
  stage.longTasks = [];
  document.addEventListener('securitypolicyviolation', (event) => {
    stage.violations.push(`${event.violatedDirective} ${event.blockedURI} ${event.sourceFile}:${event.lineNumber}`);
  });
  new PerformanceObserver((list) => {
    for (const entry of list.getEntries()) stage.longTasks.push(entry.duration);
  }).observe({ type: 'longtask', buffered: true });
  const answer = (call: string): unknown => {
    switch (call) {
      case 'open':
        return data.open !== null && 'problem' in (data.open as object) ? data.open : { ok: data.open };
      case 'bytes': {
        if (data.bytes === null) return { problem: data.bytesProblem };
        const image = Uint8Array.from(atob(data.bytes), (letter) => letter.charCodeAt(0)).buffer;
        return { ok: { image, roughness: null } };
      }
      case 'build':
        return { ok: { built: 1, unchanged: 0, failed: 0 } };
      case 'adopt':
        return { ok: { path: 'sizeproof.json' } };
      default:
        return { ok: {} };
    }
  };
  stage.acquireVsCodeApi = () => ({
    postMessage: (request: { id: number; call: string; question: unknown }) => {
      stage.asked.push({ call: request.call, question: request.question });
      const reply = {
        protocol: data.protocol,
        kind: 'reply',
        id: request.id,
        revision: 1,
        reply: answer(request.call),
      };
      setTimeout(() => window.postMessage(reply, '*'), 0);
    },
    getState: () => stage.kept,
    setState: (state: unknown) => {
      stage.kept = state;
    },
  });
}

export function playData(recording: Recording): Parameters<typeof playRecording>[0] {
  return {
    protocol: PROTOCOL,
    open: recording.open,
    bytes: recording.bytesProblem === undefined ? Buffer.from(recording.bytes).toString('base64') : null,
    bytesProblem: recording.bytesProblem ?? null,
    kept: recording.kept ?? null,
  };
}
