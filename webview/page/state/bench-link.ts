import type { SourceHeader } from '../../../core/codec/source.ts';
import type { Problem } from '../../../core/problem.ts';
import type { Answer, Answers, FromBench, ToBench, Want, WantKind } from '../../../core/proof/want.ts';
import { treatmentText } from './treatment-text.ts';
import { type Failed, WorkerLink } from './worker-link.ts';

/** What the worker said to a want; undefined while it has said nothing. */
export type Told<K extends WantKind> = Answers[K] | Failed | undefined;

export function isProblem(told: object | undefined): told is Failed {
  return told !== undefined && 'problem' in told;
}

type Open = Extract<ToBench, { kind: 'open' }>;

/** The link of a proof's page. */
export class BenchLink extends WorkerLink<Want, Answer, Open, FromBench> {
  /** Whether the file that was opened last has been read. */
  #ready = false;
  /** Of the last file that was read: another one may be on its way. */
  header: SourceHeader | null = null;
  /** Why prints are made slowly; null where they are not. */
  slow: Problem | null = null;

  constructor(worker: Worker, changed: () => void) {
    super(worker, changed, sizeOf);
  }

  open(name: string, bytes: ArrayBuffer, roughness: ArrayBuffer | null): void {
    this.#ready = false;
    this.openNext({ name, bytes, roughness }, roughness === null ? [bytes] : [bytes, roughness]);
  }

  told<K extends WantKind>(want: Want & { readonly kind: K }): Told<K> {
    return this.answerTo(want) as Told<K>;
  }

  protected override isReady(): boolean {
    return this.#ready;
  }

  protected override keyOf(want: Want): string {
    if (!('treatment' in want)) return JSON.stringify(want);
    const { treatment, ...rest } = want;
    return `${JSON.stringify(rest)} ${treatmentText(treatment)}`;
  }

  protected override take(message: FromBench): void {
    if (message.kind !== 'opened') {
      this.keep(message);
      return;
    }
    this.header = message.header;
    this.#ready = true;
    this.slow = message.slow;
  }
}

function sizeOf(answer: Answer | Failed): number {
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
