import { Cancelled } from '../port.ts';
import { type Problem, Refusal } from '../problem.ts';
import type { Codes } from '../raster/raster.ts';
import { type BenchPorts, ProofBench } from './bench.ts';
import type { Answer, FromBench, ToBench, Want } from './want.ts';

/** Works through what the page wants, one want at a time and in its order. A new list replaces the old one, and what is being
 *  worked on goes on only where the new list still wants it. */
export class Desk {
  readonly #ports: BenchPorts;
  readonly #slow: Problem | null;
  readonly #post: (message: FromBench, transfer: ArrayBuffer[]) => void;
  #bench: Promise<ProofBench> | null = null;
  #revision = 0;
  #waiting: { readonly key: string; readonly want: Want }[] = [];
  #running: { readonly key: string; readonly cancel: { cancelled: boolean } } | null = null;

  constructor(
    ports: BenchPorts,
    options: {
      /** Why the ports have no SIMD engine; null where they have. */
      readonly slow: Problem | null;
      /** Takes what is said, and the buffers that go with it. */
      readonly post: (message: FromBench, transfer: ArrayBuffer[]) => void;
    },
  ) {
    this.#ports = ports;
    this.#slow = options.slow;
    this.#post = options.post;
  }

  take(message: ToBench): void {
    if (message.revision < this.#revision) return;
    this.#revision = message.revision;
    switch (message.kind) {
      case 'open':
        this.#stop();
        this.#waiting = [];
        this.#open(new Uint8Array(message.bytes), message.name);
        return;
      case 'want': {
        const wanted = message.wants.some(({ key }) => key === this.#running?.key);
        if (!wanted) this.#stop();
        this.#waiting = message.wants.filter(({ key }) => !wanted || key !== this.#running?.key);
        void this.#work();
      }
    }
  }

  #stop(): void {
    if (this.#running !== null) this.#running.cancel.cancelled = true;
  }

  #open(bytes: Uint8Array, name: string): void {
    const revision = this.#revision;
    const opening = ProofBench.open(bytes, name, this.#ports);
    this.#bench = opening;
    opening.then(
      ({ header }) => this.#post({ kind: 'opened', revision, header, slow: this.#slow }, []),
      (error) => {
        if (this.#bench === opening) this.#bench = null;
        this.#post({ kind: 'problem', revision, key: null, problem: problemOf(error) }, []);
      },
    );
  }

  async #work(): Promise<void> {
    if (this.#running !== null) return;
    for (let next = this.#waiting.shift(); next !== undefined; next = this.#waiting.shift()) {
      const { key, want } = next;
      const revision = this.#revision;
      const cancel = { cancelled: false };
      this.#running = { key, cancel };
      try {
        const bench = await this.#bench;
        if (bench === null) break;
        const answer = await bench.answer(want, cancel);
        if (!cancel.cancelled) this.#post({ kind: 'answer', revision, key, answer }, buffersOf(answer));
      } catch (error) {
        if (!(error instanceof Cancelled)) {
          this.#post({ kind: 'problem', revision, key, problem: problemOf(error) }, []);
        }
      } finally {
        this.#running = null;
      }
      // Messages that came meanwhile are read before the next want is begun.
      await this.#ports.pause();
      if (this.#running !== null) return;
    }
  }
}

function buffersOf(answer: Answer): ArrayBuffer[] {
  switch (answer.kind) {
    case 'print':
      return [bufferOf(answer.picture.codes)];
    case 'levels':
      return answer.levels.map(({ cut }) => bufferOf(cut.codes));
    case 'halo':
      return answer.marks === null ? [] : [bufferOf(answer.marks)];
    case 'section':
      return [bufferOf(answer.codes)];
    case 'footprint':
      return [];
  }
}

/** Codes that a bench answers lie in memory of their own, which is never shared. */
function bufferOf(codes: Codes): ArrayBuffer {
  return codes.buffer as ArrayBuffer;
}

function problemOf(error: unknown): Problem {
  if (error instanceof Refusal) return error.problem;
  const reason = error instanceof Error ? error.message : String(error);
  return { code: 'unexpected', severity: 'error', values: { reason } };
}
