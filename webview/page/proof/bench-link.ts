import type { SourceHeader } from '../../../core/codec/source.ts';
import type { Problem } from '../../../core/problem.ts';
import { Shelf } from '../../../core/proof/shelf.ts';
import type { Answer, Answers, FromBench, ToBench, Want, WantKind } from '../../../core/proof/want.ts';

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
  open(name: string, bytes: ArrayBuffer): void {
    this.#revision++;
    this.#sent = '';
    this.#answers.clear();
    this.header = null;
    this.problem = null;
    this.#post({ kind: 'open', revision: this.#revision, name, bytes }, [bytes]);
  }

  /** In the order in which they are needed. What is known is not asked for again. */
  want(wants: readonly Want[]): void {
    if (this.header === null) return;
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

const keys = new WeakMap<object, string>();

/** Treatments are the long part of a want and the same object for long: their text is made once. */
function keyOf(want: Want): string {
  if (!('treatment' in want)) return JSON.stringify(want);
  const { treatment, ...rest } = want;
  let text = keys.get(treatment);
  if (text === undefined) {
    text = JSON.stringify(treatment);
    keys.set(treatment, text);
  }
  return `${JSON.stringify(rest)} ${text}`;
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
    case 'section':
      return answer.codes.byteLength;
    case 'footprint':
      return 4096;
  }
}
