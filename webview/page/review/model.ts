import type { Problem } from '../../../core/problem.ts';
import type { QuestionOf } from '../../../core/protocol.ts';
import type { Review } from '../../../core/review/review.ts';
import type { PairAnswer, PairSide, ReviewCalls, ReviewOpenReply, ReviewWant } from '../../../core/review/want.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import type { ReviewLink } from '../../link/review-link.ts';
import { setWords } from '../words/t.ts';
import type { ReviewBenchLink } from './bench-link.ts';
import { isAt, type SizeStop, stopsOf, worstStop } from './sizes.ts';
import { type ReviewShow, type ReviewState, readReviewState, turnTo, writeReviewState } from './state.ts';

/** All that a review's page knows, and the one way in which it changes. Fires `change` when something did. */
export class ReviewModel extends EventTarget {
  readonly link: ReviewLink;
  readonly #makeBench: (changed: () => void) => Promise<ReviewBenchLink>;
  #bench: ReviewBenchLink | null = null;
  #state: ReviewState;
  #stops: { readonly review: Review; readonly stops: readonly SizeStop[] } | null = null;
  #keeping: ReturnType<typeof setTimeout> | undefined;
  #sides: { readonly before: PairSide; readonly after: PairSide } | null = null;
  #asked = 0;
  #loads = 0;
  open: ReviewOpenReply | null = null;
  /** Why the page cannot show anything. */
  problem: Problem | null = null;

  constructor(link: ReviewLink, makeBench: (changed: () => void) => Promise<ReviewBenchLink>) {
    super();
    this.link = link;
    this.#makeBench = makeBench;
    this.#state = readReviewState(link.kept());
    link.listen(() => void this.start());
  }

  get state(): ReviewState {
    return this.#state;
  }

  /** Changes what is kept; the rest of the page follows. */
  set(patch: Partial<ReviewState>): void {
    this.#state = { ...this.#state, ...patch };
    this.#keep();
    this.#changed();
  }

  /** Handshake; the files follow where another texture is at hand. Also what trying again does. */
  async start(): Promise<void> {
    const asked = ++this.#asked;
    const { reply } = await this.link.ask('open', null);
    if (asked !== this.#asked) return;
    if ('problem' in reply) return this.#fail(reply.problem);
    const isFirst = this.open === null;
    const isOther = this.open?.key !== reply.ok.key || this.problem !== null;
    this.problem = null;
    this.open = reply.ok;
    setWords(reply.ok.words);
    if (isFirst && this.#state.key === '') this.#state = { ...this.#state, backdrop: reply.ok.preferences.backdrop };
    if (isOther) {
      this.#state = turnTo(this.#state, reply.ok.key);
      this.#keep();
      await this.#load();
    }
    this.#changed();
  }

  close(): void {
    clearTimeout(this.#keeping);
    this.#bench?.close();
    this.link.close();
  }

  /** Asks the host for something that has no answer but what it tells afterwards. */
  do<K extends 'go' | 'look' | 'proof' | 'copy'>(call: K, question: QuestionOf<ReviewCalls, K>): void {
    void this.link.ask(call, question).then(({ reply }) => {
      if ('problem' in reply) this.#fail(reply.problem);
    });
  }

  get review(): Review | null {
    const told = this.#sides === null ? undefined : this.#bench?.told({ kind: 'review' });
    return told === undefined || 'problem' in told ? null : told.review;
  }

  get stops(): readonly SizeStop[] {
    const { review } = this;
    if (review === null) return [];
    if (this.#stops?.review !== review) this.#stops = { review, stops: stopsOf(review) };
    return this.#stops.stops;
  }

  /** The size under the sight. */
  get seen(): SizeStop | null {
    const { stops, review } = this;
    const { sight } = this.#state;
    if (review === null) return null;
    return stops.find((stop) => sight !== null && isAt(stop, sight)) ?? worstStop(review, stops);
  }

  /** Both pictures at a size; null until they are made. */
  pair(stop: SizeStop): PairAnswer | { readonly problem: Problem } | null {
    return this.#bench?.told({ kind: 'pair', image: stop.size.image }) ?? null;
  }

  /** The treatment of a side; null where it has none. */
  treatment(side: 'before' | 'after'): Treatment | null {
    const given = this.#sides?.[side];
    return given?.kind === 'file' ? given.treatment : null;
  }

  /** How the versions are shown. */
  get show(): ReviewShow {
    const treatment = this.treatment('after') ?? this.treatment('before');
    const channels = (this.review?.after ?? this.review?.before)?.channels ?? 3;
    return this.#state.show ?? (treatment?.alpha.use === 'mask' && channels % 2 === 0 ? 'mask' : 'color');
  }

  /** Why a side is not there: it never was, or what is wrong with it. */
  missing(side: 'before' | 'after'): 'none' | Problem | null {
    const given = this.#sides?.[side];
    if (given === undefined) return null;
    if (given.kind === 'none') return 'none';
    if (given.kind === 'problem') return given.problem;
    return this.review?.problems.find((each) => each.side === side)?.problem ?? null;
  }

  /** First what is looked at, then the small sizes for the axis. */
  want(): void {
    const { seen, stops } = this;
    const wants: ReviewWant[] = [{ kind: 'review' }];
    const small = stops.filter(({ extent }) => extent.width * extent.height <= THUMB_TEXELS);
    for (const stop of seen === null ? [] : [seen, ...small]) wants.push({ kind: 'pair', image: stop.size.image });
    this.#bench?.want(wants);
  }

  /** A handshake meanwhile that finds the same texture leaves this under way. */
  async #load(): Promise<void> {
    const load = ++this.#loads;
    this.#sides = null;
    this.#changed();
    const { reply } = await this.link.ask('sides', null);
    if (load !== this.#loads) return;
    if ('problem' in reply) return this.#fail(reply.problem);
    try {
      this.#bench ??= await this.#makeBench(() => this.#benchChanged());
    } catch (error) {
      const reason = error instanceof Error ? error.message : String(error);
      return this.#fail({ code: 'unexpected', severity: 'error', values: { reason } });
    }
    const { before, after } = reply.ok;
    this.#bench.open(before, after);
    this.#sides = { before, after };
  }

  #benchChanged(): void {
    const told = this.#bench?.told({ kind: 'review' });
    if (this.#bench?.problem != null) this.problem = this.#bench.problem;
    else if (told !== undefined && 'problem' in told) this.problem = told.problem;
    this.#changed();
  }

  #keep(): void {
    clearTimeout(this.#keeping);
    this.#keeping = setTimeout(() => this.link.keep(writeReviewState(this.#state)), 150);
  }

  #fail(problem: Problem): void {
    this.problem = problem;
    this.#changed();
  }

  #changed(): void {
    this.dispatchEvent(new Event('change'));
  }
}

/** Sizes whose pictures are made for the axis without being looked at: up to 512 x 512. */
const THUMB_TEXELS = 2 ** 18;
