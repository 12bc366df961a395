import type { Print, PrintImage, Want } from '../../../core/proof/want.ts';
import type { FirstPrint } from '../../../core/protocol.ts';
import type { Codes } from '../../../core/raster/raster.ts';
import type { Treatment } from '../../../core/treatment/treatment.ts';
import { treatmentText } from './treatment-text.ts';

/** In how many codes two prints of one image differ; `all` counts those of one. */
export interface Disagreement {
  readonly count: number;
  readonly all: number;
}

/** The host's first print: it stands in until the page's own worker has made the same, which must then be equal, code for code.
 *  Nothing that the host says of hashes is believed: the codes themselves are compared. */
export class Takeover {
  #first: { readonly print: FirstPrint; readonly treatment: string; readonly revision: number } | null = null;
  /** Revision of the file that came; null while none has. */
  #arrived: number | null = null;
  /** Null while both agree, or one is still to come. */
  disagreement: Disagreement | null = null;

  /** Forgets all: the file is asked for anew. */
  reset(): void {
    this.#first = null;
    this.#arrived = null;
    this.disagreement = null;
  }

  /** What the host made, of a revision of file and settings. */
  take(print: FirstPrint | null, revision: number): void {
    if (print === null || (this.#arrived ?? revision) !== revision) return;
    this.#first = { print, treatment: treatmentText(print.treatment), revision };
  }

  /** The file came, of this revision: a first print of another one says nothing about it. */
  arrive(revision: number): void {
    this.#arrived = revision;
    this.disagreement = null;
    if (this.#first !== null && this.#first.revision !== revision) this.#first = null;
  }

  get header() {
    return this.#first?.print.header ?? null;
  }

  /** What the page's worker must make so that it can be compared; null where there is nothing to compare. */
  wanted(treatment: Treatment): (Want & { readonly kind: 'print' }) | null {
    if (!this.#isOf(treatment)) return null;
    return { kind: 'print', treatment, image: this.#first!.print.image };
  }

  /** The host's print of an image. */
  printOf(treatment: Treatment, image: PrintImage): Print | undefined {
    if (!this.#isOf(treatment) || JSON.stringify(this.#first!.print.image) !== JSON.stringify(image)) return undefined;
    const { picture, stats } = this.#first!.print;
    return { kind: 'print', picture, stats };
  }

  /** Any print by this treatment, to stand in, stretched, for one that is not made yet. */
  standIn(treatment: Treatment) {
    return this.#isOf(treatment) && 'level' in this.#first!.print.image ? this.#first!.print.picture : null;
  }

  /** Compares with the page's own print of `wanted`. The host's is let go. */
  judge(own: Print): void {
    if (this.#first === null) return;
    const { picture } = this.#first.print;
    const { extent, channels, depth, codes } = own.picture;
    const same =
      picture.extent.width === extent.width &&
      picture.extent.height === extent.height &&
      picture.channels === channels &&
      picture.depth === depth;
    const count = same ? differing(picture.codes, codes) : codes.length;
    this.disagreement = count === 0 ? null : { count, all: codes.length };
    this.#first = null;
  }

  #isOf(treatment: Treatment): boolean {
    return this.#first !== null && this.#first.treatment === treatmentText(treatment);
  }
}

function differing(one: Codes, other: Codes): number {
  let count = Math.abs(one.length - other.length);
  for (let at = 0; at < Math.min(one.length, other.length); at++) if (one[at] !== other[at]) count++;
  return count;
}
