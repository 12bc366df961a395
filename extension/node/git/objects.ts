import type { ChildProcessWithoutNullStreams } from 'node:child_process';
import { refuse } from '../../../core/problem.ts';
import { spawnRefusal, startGit, tryGit } from './run.ts';

/** Reads objects of one repository, one after the other, through a Git that stays open. */
export interface Objects {
  /** Asks for the sizes of many at once, so that `size` and `read` know them; those that are not there are left out. */
  expect(ids: readonly string[]): Promise<void>;
  /** Bytes of a blob, without reading it. Throws Refusal `git-object-missing`. */
  size(id: string): Promise<number>;
  /** A blob. Throws Refusal: missing, damaged, or larger than `limitBytes`. */
  read(id: string, limitBytes: number): Promise<Buffer>;
  close(): void;
}

export function openObjects(repository: string): Objects {
  const sizes = openBatch(repository, '--batch-check');
  const contents = openBatch(repository, '--batch');
  const known = new Map<string, number>();
  const size = async (id: string): Promise<number> => {
    const bytes = known.get(id) ?? (await sizes.ask(id)).bytes;
    known.set(id, bytes);
    return bytes;
  };
  return {
    async expect(ids) {
      const { stdout } = await tryGit(repository, ['cat-file', '--batch-check'], `${ids.join('\n')}\n`);
      for (const line of stdout.toString().split('\n')) {
        const [, id, bytes] = /^([0-9a-f]+) \w+ (\d+)$/.exec(line) ?? [];
        if (id !== undefined) known.set(id, Number(bytes));
      }
    },
    size,
    async read(id, limitBytes) {
      const bytes = await size(id);
      if (bytes > limitBytes) refuse('side-too-large', { bytes, limit: limitBytes });
      const { body } = await contents.ask(id);
      return body ?? Buffer.alloc(0);
    },
    close() {
      sizes.close();
      contents.close();
    },
  };
}

interface Answer {
  readonly bytes: number;
  readonly body: Buffer | null;
}

interface Batch {
  ask(id: string): Promise<Answer>;
  close(): void;
}

/** One question at a time: `<id>` in; `<id> <type> <size>` out, and with `--batch` the bytes and a line end; or `<id> missing`. A Git
 *  that ends, as over a damaged object, takes its question with it and the next one starts another. */
function openBatch(repository: string, mode: '--batch' | '--batch-check'): Batch {
  let running: Running | null = null;
  let last: Promise<unknown> = Promise.resolve();

  return {
    ask(id) {
      const answer = last.then(async () => {
        if (running === null || running.ended()) running = start(repository, mode);
        return running.ask(id);
      });
      last = answer.catch(() => undefined);
      return answer;
    },
    close() {
      running?.child.stdin.end();
      running = null;
    },
  };
}

interface Running {
  readonly child: ChildProcessWithoutNullStreams;
  ask(id: string): Promise<Answer>;
  ended(): boolean;
}

function start(repository: string, mode: '--batch' | '--batch-check'): Running {
  const child = startGit(repository, ['cat-file', mode]);
  let pending: Pending | null = null;
  let isOver = false;
  let complaint = '';
  const fail = (error: unknown) => {
    isOver = true;
    pending?.fail(error);
    pending = null;
  };
  child.stdout.on('data', (piece: Buffer) => pending?.take(piece));
  child.stderr.on('data', (piece: Buffer) => {
    if (complaint.length < 2000) complaint += piece.toString();
  });
  child.stdin.on('error', () => undefined);
  child.on('error', (error) => fail(spawnRefusal(error, repository)));
  child.on('close', (code) => {
    const said = complaint.replaceAll(/\s+/g, ' ').trim();
    const damage =
      pending === null ? null : damaged(pending.id, said || `\`git cat-file\` ended with exit code ${code}`);
    fail(damage);
  });

  return {
    child,
    ended: () => isOver,
    ask: (id) =>
      new Promise<Answer>((resolve, reject) => {
        const done = (answer: Answer) => {
          pending = null;
          resolve(answer);
        };
        pending = takeAnswer(id, mode, done, (error) => {
          pending = null;
          reject(error);
        });
        complaint = '';
        child.stdin.write(`${id}\n`);
      }),
  };
}

interface Pending {
  readonly id: string;
  take(piece: Buffer): void;
  fail(error: unknown): void;
}

/** Collects one answer. The body is read into one buffer of its own size. */
function takeAnswer(
  id: string,
  mode: '--batch' | '--batch-check',
  done: (answer: Answer) => void,
  fail: (error: unknown) => void,
): Pending {
  let head = Buffer.alloc(0);
  let body: Buffer | null = null;
  let bytes = 0;
  let filled = 0;

  return { id, fail, take };

  function take(piece: Buffer): void {
    if (body === null) readHead(piece);
    else fill(piece);
  }

  function readHead(piece: Buffer): void {
    head = Buffer.concat([head, piece]);
    const end = head.indexOf(0x0a);
    if (end < 0) return;
    const found = /^[0-9a-f]+ \w+ (\d+)$/.exec(head.subarray(0, end).toString());
    if (found === null) {
      fail(caught(() => refuse('git-object-missing', { id: id.slice(0, 10) })));
      return;
    }
    bytes = Number(found[1]);
    if (mode === '--batch') {
      body = Buffer.alloc(bytes + 1);
      fill(head.subarray(end + 1));
    } else done({ bytes, body: null });
  }

  function fill(piece: Buffer): void {
    if (body === null) return;
    piece.copy(body, filled);
    filled += piece.length;
    if (filled >= body.length) done({ bytes, body: body.subarray(0, bytes) });
  }
}

function damaged(id: string, reason: string): unknown {
  return caught(() => refuse('git-object-damaged', { id: id.slice(0, 10), reason }));
}

function caught(act: () => never): unknown {
  try {
    return act();
  } catch (error) {
    return error;
  }
}
