import type { Problem } from '../problem.ts';
import type { Codes } from '../raster/raster.ts';
import { type BenchPorts, ProofBench } from './bench.ts';
import { problemOf, WantQueue } from './queue.ts';
import type { Answer, FromBench, ToBench, Want } from './want.ts';

/** Opens the file that a page is about, and works through what it wants. */
export class Desk {
  readonly #ports: BenchPorts;
  readonly #slow: Problem | null;
  readonly #post: (message: FromBench, transfer: ArrayBuffer[]) => void;
  readonly #queue: WantQueue<Want>;
  #bench: Promise<ProofBench> | null = null;
  #revision = 0;

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
    this.#queue = new WantQueue<Want>({
      pause: ports.pause,
      fail: (key, problem) => this.#post({ kind: 'problem', revision: this.#revision, key, problem }, []),
      work: async ({ key, want }, cancel) => {
        const revision = this.#revision;
        const bench = await this.#bench;
        if (bench === null) return;
        const answer = await bench.answer(want, cancel);
        if (!cancel.cancelled) this.#post({ kind: 'answer', revision, key, answer }, buffersOf(answer));
      },
    });
  }

  take(message: ToBench): void {
    if (message.revision < this.#revision) return;
    this.#revision = message.revision;
    switch (message.kind) {
      case 'open':
        this.#queue.clear();
        this.#open(message);
        return;
      case 'want':
        this.#queue.want(message.wants);
    }
  }

  #open({ name, bytes, roughness }: ToBench & { readonly kind: 'open' }): void {
    const revision = this.#revision;
    const map = roughness && new Uint8Array(roughness);
    const opening = ProofBench.open(new Uint8Array(bytes), name, this.#ports, map);
    this.#bench = opening;
    opening.then(
      ({ header }) => this.#post({ kind: 'opened', revision, header, slow: this.#slow }, []),
      (error) => {
        if (this.#bench === opening) this.#bench = null;
        this.#post({ kind: 'problem', revision, key: null, problem: problemOf(error) }, []);
      },
    );
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
    case 'art':
      return answer.off === null ? [] : [bufferOf(answer.off.marks)];
    case 'section':
      return [bufferOf(answer.codes)];
    case 'footprint':
    case 'pixels':
      return [];
  }
}

/** Codes that a bench answers lie in memory of their own, which is never shared. */
function bufferOf(codes: Codes): ArrayBuffer {
  return codes.buffer as ArrayBuffer;
}
