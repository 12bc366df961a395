import type { Ports } from '../port.ts';
import { WantQueue } from '../proof/queue.ts';
import type { Codes } from '../raster/raster.ts';
import { ReviewBench } from './bench.ts';
import type { FromReviewBench, ReviewAnswer, ReviewWant, ToReviewBench } from './want.ts';

/** Opens the two versions that a page is about, and works through what it wants, as core's other desk does for one file. */
export class ReviewDesk {
  readonly #ports: Ports;
  readonly #memoryBytes: number;
  readonly #queue: WantQueue<ReviewWant>;
  #bench: ReviewBench | null = null;
  #revision = 0;

  constructor(
    ports: Ports & { readonly pause: () => Promise<void> },
    options: {
      /** Bytes that a comparison may hold. */
      readonly memoryBytes: number;
      /** Takes what is said, and the buffers that go with it. */
      readonly post: (message: FromReviewBench, transfer: ArrayBuffer[]) => void;
    },
  ) {
    this.#ports = ports;
    this.#memoryBytes = options.memoryBytes;
    this.#queue = new WantQueue<ReviewWant>({
      pause: ports.pause,
      fail: (key, problem) => options.post({ kind: 'problem', revision: this.#revision, key, problem }, []),
      work: async ({ key, want }, cancel) => {
        const revision = this.#revision;
        if (this.#bench === null) return;
        const answer = await this.#bench.answer(want, cancel);
        if (!cancel.cancelled) options.post({ kind: 'answer', revision, key, answer }, buffersOf(answer));
      },
    });
  }

  take(message: ToReviewBench): void {
    if (message.revision < this.#revision) return;
    this.#revision = message.revision;
    switch (message.kind) {
      case 'open':
        this.#queue.clear();
        this.#bench = new ReviewBench(message.before, message.after, this.#ports, { memoryBytes: this.#memoryBytes });
        return;
      case 'want':
        this.#queue.want(message.wants);
    }
  }
}

/** Pictures that a bench answers are copies, and marks are made for their answer. */
function buffersOf(answer: ReviewAnswer): ArrayBuffer[] {
  if (answer.kind === 'review') return [];
  const codes = [answer.before, answer.after].flatMap((side) => (side === null ? [] : [side.picture.codes]));
  return [...codes, ...(answer.marks === null ? [] : [answer.marks])].map(bufferOf);
}

function bufferOf(codes: Codes): ArrayBuffer {
  return codes.buffer as ArrayBuffer;
}
