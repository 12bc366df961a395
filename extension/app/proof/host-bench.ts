import type { SourceHeader } from '../../../core/codec/source.ts';
import { Refusal } from '../../../core/problem.ts';
import type { FromBench, Print, PrintImage } from '../../../core/proof/want.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import type { BenchWorker } from '../platform.ts';

/** A worker of the host with one file open in it. What it makes is asked for by one caller at a time: a new wish replaces the
 *  one before, which is then never answered. */
export class HostBench {
  readonly #worker: BenchWorker;
  readonly #waiting = new Map<string, { resolve(message: FromBench): void; reject(error: Error): void }>();
  #asked = 0;
  /** Rejects with a Refusal where the file cannot be read. */
  readonly header: Promise<SourceHeader>;

  constructor(worker: BenchWorker, name: string, bytes: ArrayBuffer) {
    this.#worker = worker;
    worker.listen((message) => this.#take(message));
    this.header = this.#next(OPENED).then((message) => {
      if (message.kind !== 'opened') throw new TypeError(`Expected a header but received ${message.kind}`);
      return message.header;
    });
    // Who asks for a print hears of it; nobody may have asked yet.
    this.header.catch(() => undefined);
    worker.post({ kind: 'open', revision: REVISION, name, bytes, roughness: null });
  }

  /** Rejects with a Refusal where the treatment does not fit. */
  async print(treatment: Treatment, image: PrintImage): Promise<Print> {
    const key = String(++this.#asked);
    const answered = this.#next(key);
    this.#worker.post({
      kind: 'want',
      revision: REVISION,
      wants: [{ key, want: { kind: 'print', treatment, image } }],
    });
    const message = await answered;
    if (message.kind === 'answer' && message.answer.kind === 'print') return message.answer;
    throw new TypeError(`Expected a print but received ${message.kind}`);
  }

  stop(): void {
    this.#worker.stop();
    this.#fail(new Error('The worker was stopped'));
  }

  #next(key: string): Promise<FromBench> {
    return new Promise((resolve, reject) => this.#waiting.set(key, { resolve, reject }));
  }

  #take(message: FromBench | null): void {
    if (message === null) {
      this.#fail(new Error('The worker ended'));
      return;
    }
    const key = message.kind === 'opened' ? OPENED : (message.key ?? OPENED);
    const waiting = this.#waiting.get(key);
    this.#waiting.delete(key);
    if (message.kind === 'problem') waiting?.reject(new Refusal(message.problem));
    else waiting?.resolve(message);
  }

  #fail(error: Error): void {
    for (const { reject } of this.#waiting.values()) reject(error);
    this.#waiting.clear();
  }
}

/** One file is opened in a worker, once. */
const REVISION = 1;
const OPENED = 'opened';
