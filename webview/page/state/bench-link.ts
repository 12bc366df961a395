import type { SourceHeader } from '../../../core/codec/source.ts';
import type { Problem } from '../../../core/problem.ts';
import { Shelf } from '../../../core/proof/shelf.ts';
import type { Answer, Answers, FromBench, ToBench, Want, WantKind } from '../../../core/proof/want.ts';
import { treatmentText } from './treatment-text.ts';

/** What the worker said to a want; undefined while it has said nothing. */
export type Told<K extends WantKind> = Answers[K] | { readonly problem: Problem } | undefined;

export function isProblem(told: object | undefined): told is { readonly problem: Problem } {
  return told !== undefined && 'problem' in told;
}

/** The page's side of its worker: what is wanted goes out, answers are kept by want. */
export class BenchLink {
  readonly #worker: Worker;
  readonly #answers = new Shelf<Answer | { readonly problem: Problem }>(ANSWER_BYTES, sizeOf);
  readonly #changed: () => void;
  #revision = 0;
  #sent = '';
  /** Whether the file that was opened last has been read. */
  #ready = false;
  /** Of the last file that was read: another one may be on its way. */
  header: SourceHeader | null = null;
  problem: Problem | null = null;
  /** Why prints are made slowly; null where they are not. */
  slow: Problem | null = null;

  constructor(worker: Worker, changed: () => void) {
    this.#worker = worker;
    this.#changed = changed;
    worker.onmessage = (event: MessageEvent<FromBench>) => this.#take(event.data);
    worker.onerror = (event) => {
      const values = { reason: event.message ?? 'worker' };
      this.problem = { code: 'unexpected', severity: 'error', values };
      changed();
    };
  }

  /** Another file, or other bytes of the same: what was answered before is forgotten. */
  open(name: string, bytes: ArrayBuffer, roughness: ArrayBuffer | null): void {
    this.#revision++;
    this.#sent = '';
    this.#answers.clear();
    this.#ready = false;
    this.problem = null;
    const buffers = roughness === null ? [bytes] : [bytes, roughness];
    this.#post({ kind: 'open', revision: this.#revision, name, bytes, roughness }, buffers);
  }

  /** In the order in which they are needed. What is known is not asked for again. */
  want(wants: readonly Want[]): void {
    if (!this.#ready) return;
    const keyed = new Map(wants.map((want) => [keyOf(want), want]));
    const open = [...keyed].filter(([key]) => this.#answers.get(key) === undefined);
    const list = open.map(([key]) => key).join('\n');
    if (list === this.#sent) return;
    this.#sent = list;
    this.#post({ kind: 'want', revision: this.#revision, wants: open.map(([key, want]) => ({ key, want })) }, []);
  }

  told<K extends WantKind>(want: Want & { readonly kind: K }): Told<K> {
    return this.#answers.get(keyOf(want)) as Told<K>;
  }

  close(): void {
    this.#worker.terminate();
  }

  #post(message: ToBench, transfer: Transferable[]): void {
    this.#worker.postMessage(message, transfer);
  }

  #take(message: FromBench): void {
    if (message.revision !== this.#revision) return;
    switch (message.kind) {
      case 'opened':
        this.header = message.header;
        this.#ready = true;
        this.slow = message.slow;
        break;
      case 'answer':
        this.#answers.put(message.key, message.answer);
        break;
      case 'problem':
        if (message.key === null) this.problem = message.problem;
        else this.#answers.put(message.key, { problem: message.problem });
        break;
    }
    this.#changed();
  }
}

/** Bytes of answers that the page keeps, so that going back is immediate. */
const ANSWER_BYTES = 160 * 1024 * 1024;

function keyOf(want: Want): string {
  if (!('treatment' in want)) return JSON.stringify(want);
  const { treatment, ...rest } = want;
  return `${JSON.stringify(rest)} ${treatmentText(treatment)}`;
}

function sizeOf(answer: Answer | { readonly problem: Problem }): number {
  if ('problem' in answer) return 256;
  switch (answer.kind) {
    case 'print':
      return answer.picture.codes.byteLength;
    case 'levels':
      return answer.levels.reduce((sum, { cut }) => sum + cut.codes.byteLength, 0);
    case 'halo':
      return answer.marks?.byteLength ?? 0;
    case 'art':
      return answer.off?.marks.byteLength ?? 64;
    case 'section':
      return answer.codes.byteLength;
    case 'footprint':
      return 4096;
    case 'pixels':
      return 64;
  }
}
