import { type Cancel, Cancelled, type Ports } from '../port.ts';
import { Refusal } from '../problem.ts';
import { copyPicture } from '../proof/picture.ts';
import { comparePictures } from './difference.ts';
import { type Review, reviewTexture, type SideGiven } from './review.ts';
import { pairSizes, reviewSize, type Shown, type SizeReview } from './sizes.ts';
import { checkPeak, makeSubject, openSide, type Subject } from './subject.ts';
import {
  HIDDEN_MARK,
  MARK_SCALE,
  type PairAnswer,
  type PairPicture,
  type PairSide,
  type ReviewAnswer,
  type ReviewWant,
} from './want.ts';

/** Two versions of a texture, opened, with their chains: what a page looks at. The numbers are those of `reviewTexture`, the pictures
 *  those of a build. */
export class ReviewBench {
  readonly #before: SideGiven;
  readonly #after: SideGiven;
  readonly #ports: Ports;
  readonly #memoryBytes: number;
  #subjects: Promise<readonly [Subject | null, Subject | null]> | null = null;
  #review: Promise<Review> | null = null;

  constructor(before: PairSide, after: PairSide, ports: Ports, { memoryBytes }: { readonly memoryBytes: number }) {
    this.#before = givenOf(before);
    this.#after = givenOf(after);
    this.#ports = ports;
    this.#memoryBytes = memoryBytes;
  }

  /** Throws Refusal where a picture that is asked for cannot be had, Cancelled when asked to stop. */
  async answer(want: ReviewWant, cancel: Cancel): Promise<ReviewAnswer> {
    switch (want.kind) {
      case 'review':
        return { kind: 'review', review: await this.#whole(cancel) };
      case 'pair':
        return this.#pair(want.image, cancel);
    }
  }

  #reviewed(cancel: Cancel): Promise<Review> {
    this.#review ??= reviewTexture(this.#before, this.#after, this.#ports, cancel, { memoryBytes: this.#memoryBytes });
    // What was cancelled is asked for again.
    this.#review.catch(() => {
      this.#review = null;
    });
    return this.#review;
  }

  /** With the sizes of a version that is alone, or of two that are equal: a page goes through them all the same. */
  async #whole(cancel: Cancel): Promise<Review> {
    const review = await this.#reviewed(cancel);
    if (review.sizes.length > 0) return review;
    const [before, after] = await this.#both(cancel);
    const alone = before ?? after;
    if (alone === null) return review;
    const sizes = pairSizes(before ?? alone, after ?? alone).map((pair) =>
      reviewSize({ ...pair, before: before && pair.before, after: after && pair.after }),
    );
    return { ...review, sizes };
  }

  #both(cancel: Cancel): Promise<readonly [Subject | null, Subject | null]> {
    this.#subjects ??= this.#open(cancel);
    this.#subjects.catch(() => {
      this.#subjects = null;
    });
    return this.#subjects;
  }

  async #pair(image: SizeReview['image'], cancel: Cancel): Promise<PairAnswer> {
    const [before, after] = await this.#both(cancel);
    if (cancel.cancelled) throw new Cancelled();
    const alone = before ?? after;
    if (alone === null) throw new RangeError('Expected a version but received none');
    const pair = pairSizes(before ?? alone, after ?? alone).find((each) => sameImage(each.image, image));
    if (pair === undefined) throw new RangeError(`Expected a size of the pair but received ${JSON.stringify(image)}`);
    const [one, other] = [before && pair.before, after && pair.after];
    const shown = { before: one && showed(one), after: other && showed(other) };
    if (one === null || other === null) return { kind: 'pair', image, ...shown, difference: null, marks: null };
    const { width, height } = pair.extent;
    const marks = new Uint8Array(width * height);
    const difference = comparePictures(one.seen(), other.seen(), (x, y, distance) => {
      marks[y * width + x] = markOf(distance);
    });
    return { kind: 'pair', image, ...shown, difference, marks };
  }

  async #open(cancel: Cancel): Promise<readonly [Subject | null, Subject | null]> {
    const make = async (given: SideGiven): Promise<Subject | null> => {
      if (given === null || 'problem' in given) return null;
      try {
        const opened = openSide(given, this.#ports);
        checkPeak(opened.peakBytes, this.#memoryBytes);
        return await makeSubject(opened, this.#ports, cancel);
      } catch (error) {
        // The review says what is wrong with it; the other side is looked at alone.
        if (error instanceof Refusal) return null;
        throw error;
      }
    };
    return [await make(this.#before), await make(this.#after)];
  }
}

function markOf(distance: number | null): number {
  return distance === null ? HIDDEN_MARK : Math.max(1, Math.min(254, Math.round(distance * MARK_SCALE)));
}

function showed({ seen, figures }: Shown): PairPicture {
  return { picture: copyPicture(seen().picture), figures };
}

function givenOf(side: PairSide): SideGiven {
  switch (side.kind) {
    case 'file':
      return { path: side.path, bytes: new Uint8Array(side.bytes), treatment: side.treatment };
    case 'none':
      return null;
    case 'problem':
      return { problem: side.problem };
  }
}

function sameImage(one: SizeReview['image'], other: SizeReview['image']): boolean {
  return 'level' in one
    ? 'level' in other && one.level === other.level
    : 'target' in other && one.target === other.target;
}
