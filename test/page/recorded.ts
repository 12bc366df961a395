import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Problem } from '../../core/problem.ts';
import { ProofBench } from '../../core/proof/bench.ts';
import { firstImage, type Opening } from '../../core/proof/opening.ts';
import type { Print } from '../../core/proof/want.ts';
import { type BuiltState, FIRST_PRINT_BYTES, type FirstPrint, type OpenReply, PROTOCOL } from '../../core/protocol.ts';
import type { Codes } from '../../core/raster/raster.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { top } from '../house/tree.ts';

/** What a host would answer: a recording that a page is played with. */
export interface Recording {
  readonly open: OpenReply | { readonly problem: Problem };
  readonly bytes: Uint8Array;
  /** The roughness map that the treatment names. */
  readonly roughness?: Uint8Array;
  /** Shown in place of bytes where the file cannot be read. */
  readonly bytesProblem?: Problem;
  /** What the page kept before. */
  readonly kept?: unknown;
  /** The host's first print; without it the host makes none. */
  readonly first?: FirstPrint;
  /** Whether the file is held back until `window.release()`. */
  readonly held?: 'held';
  /** What the host says of prints and the build. */
  readonly isBuilt?: boolean;
  /** Revision that the file's bytes come with; the rest is of revision 1. */
  readonly bytesRevision?: number;
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
  const { roughness } = treatment.normal;
  const recording = record(readFileSync(join(demo, path)), path, { settings: settingsReply, ...rest }, kept);
  if (roughness === null || !('path' in roughness)) return recording;
  return { ...recording, roughness: readFileSync(join(demo, roughness.path)) };
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

export const stale: BuiltState = { kind: 'stale', moved: ['settings'] };

/** Runs in the page before its script: stands in for VS Code and answers from the recording. Every request is kept in
 *  `window.asked`. */
export function playRecording(data: {
  readonly protocol: number;
  readonly open: unknown;
  readonly bytesProblem: unknown;
  readonly roughness: boolean;
  readonly kept: unknown;
  readonly first: { readonly print: FirstPrint; readonly codes: string; readonly palette: string } | null;
  readonly held: boolean;
  readonly isBuilt: boolean | null;
  readonly bytesRevision: number;
  /** Paths at which the file and the first print's codes are served; null where they come with the script and its page. */
  readonly served: { readonly bytes: string; readonly first: string } | null;
}): void {
  const stage = window as unknown as {
    acquireVsCodeApi: () => unknown;
    asked: { call: string; question: unknown }[];
    kept: unknown;
    violations: string[];
    longTasks: number[];
    release: () => void;
  };
  const unpacked = (text: string) => Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0));
  // As from an editor, whose messages other threads make ready: begun at once, and nothing of it is done on the page's thread.
  const serving =
    data.served &&
    new Worker(
      URL.createObjectURL(
        new Blob([
          'onmessage = async ({ data }) => { for (const path of data) { const read = await (await fetch(path)).arrayBuffer(); postMessage(read, [read]); } }',
        ]),
      ),
    );
  const [servedFirst, servedBytes] = [0, 1].map(
    (index) =>
      new Promise<ArrayBuffer>((resolve) => {
        let count = 0;
        serving?.addEventListener('message', (event) => {
          if (count++ === index) resolve(event.data);
          if (count === 2) serving.terminate();
        });
      }),
  );
  serving?.postMessage([data.served!.first, data.served!.bytes].map((path) => new URL(path, location.href).href));
  const released = new Promise<void>((resolve) => {
    stage.release = resolve;
    if (!data.held) resolve();
  });
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
  const answer = async (call: string): Promise<unknown> => {
    switch (call) {
      case 'open':
        return data.open !== null && 'problem' in (data.open as object) ? data.open : { ok: data.open };
      case 'bytes': {
        if (data.bytesProblem !== null) return { problem: data.bytesProblem };
        // Not with the script: unpacking it would hold the very thread that is watched.
        const image = data.served ? await servedBytes : await (await fetch('/recorded.bytes')).arrayBuffer();
        const roughness = data.roughness ? await (await fetch('/recorded.roughness')).arrayBuffer() : null;
        return { ok: { image, roughness } };
      }
      case 'firstPrint': {
        if (data.first === null) return { ok: { print: null } };
        const { print, codes, palette } = data.first;
        const buffer = data.served ? await servedFirst : unpacked(codes).buffer;
        const picture = {
          ...print.picture,
          codes: print.picture.depth === 8 ? new Uint8Array(buffer) : new Uint16Array(buffer),
        };
        const { indexed } = print.header;
        const header = { ...print.header, indexed: indexed && { ...indexed, palette: unpacked(palette) } };
        return { ok: { print: { ...print, header, picture } } };
      }
      case 'isBuilt':
        return { ok: { equal: data.isBuilt } };
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
      const ready = request.call === 'bytes' ? released : Promise.resolve();
      const revision = request.call === 'bytes' ? data.bytesRevision : 1;
      void ready
        .then(() => answer(request.call))
        .then((reply) =>
          window.postMessage(
            { protocol: data.protocol, kind: 'reply', id: request.id, revision, reply },
            '*',
            request.call === 'bytes' && 'ok' in (reply as object)
              ? [(reply as { ok: { image: ArrayBuffer } }).ok.image]
              : [],
          ),
        );
    },
    getState: () => stage.kept,
    setState: (state: unknown) => {
      stage.kept = state;
    },
  });
}

type PlayData = Parameters<typeof playRecording>[0];

export function playData(recording: Recording, served: PlayData['served'] = null): PlayData {
  return {
    served,
    protocol: PROTOCOL,
    open: recording.open,
    bytesProblem: recording.bytesProblem ?? null,
    roughness: recording.roughness !== undefined,
    kept: recording.kept ?? null,
    first: recording.first === undefined ? null : packFirst(recording.first, served === null ? 'with' : 'without'),
    held: recording.held !== undefined,
    isBuilt: recording.isBuilt ?? null,
    bytesRevision: recording.bytesRevision ?? 1,
  };
}

function packFirst(print: FirstPrint, codes: 'with' | 'without') {
  const packed = ({ buffer, byteOffset, byteLength }: Codes) =>
    Buffer.from(buffer as ArrayBuffer, byteOffset, byteLength).toString('base64');
  const { indexed } = print.header;
  return {
    // As text, a typed array would be a list of names and numbers.
    print: { ...print, picture: { ...print.picture, codes: new Uint8Array(0) } },
    codes: codes === 'with' ? packed(print.picture.codes) : '',
    palette: indexed === null ? '' : packed(indexed.palette),
  };
}

/** What the host's worker would make first, by the host's own code. */
export async function firstPrintOf({ open, bytes }: Recording, opening: Opening): Promise<FirstPrint> {
  if ('problem' in open) throw new Error('Expected a recording that opens');
  const pause = async () => undefined;
  const bench = await ProofBench.open(bytes, open.name, { inflate, newHash, pause });
  const { header } = bench;
  const treatment = open.settings.treatment!;
  const image = firstImage(header, treatment, opening, FIRST_PRINT_BYTES);
  const { picture, stats } = (await bench.answer({ kind: 'print', treatment, image }, { cancelled: false })) as Print;
  return { header, treatment, image, picture, stats };
}
