import type { QuestionOf, ReplyOf } from '../../core/protocol.ts';

/** What a page needs of whoever opened it. VS Code is one such; data inside an exported page may be another. `Calls` are what it
 *  may ask, `Told` what it may be told. */
export interface Link<Calls, Told> {
  /** Never throws and never hangs: a page that goes away, or a host that answers nonsense, is a problem in the reply. */
  ask<K extends keyof Calls>(call: K, question: QuestionOf<Calls, K>): Promise<Answered<Calls, K>>;
  /** Calls `take` for each event until the link is closed. */
  listen(take: (event: Told) => void): void;
  /** What `keep` was last given, by this page or the one before a reload; null at first. */
  kept(): unknown;
  /** Keeps a small plain value across hiding and reloading. */
  keep(state: unknown): void;
  /** Answers every pending question with a problem and takes no more messages. */
  close(): void;
}

/** A reply with the revision of source and settings that it speaks of. */
export interface Answered<Calls, K extends keyof Calls> {
  readonly revision: number;
  readonly reply: ReplyOf<Calls, K>;
}
