import type { PrintImage } from '../../../core/proof/want.ts';
import type { PrintHash } from '../../../core/protocol.ts';
import type { ProofLink } from '../../link/proof-link.ts';
import type { Output } from './output.ts';

/** Whether prints of this page have the pixels that were built. The host is told the hash that the page found and answers yes or
 *  no; the build's own hash never comes here. */
export class BuiltChecks {
  readonly #link: ProofLink;
  readonly #changed: () => void;
  #answers = new Map<string, boolean | null>();

  constructor(link: ProofLink, changed: () => void) {
    this.#link = link;
    this.#changed = changed;
  }

  /** Null while nobody knows, or where nothing was built. */
  equals(image: PrintImage, use: Output, pixels: string): boolean | null {
    if (pixels === '' || 'lod' in image) return null;
    const print: PrintHash =
      'level' in image
        ? { use, level: image.level, target: null, pixels }
        : { use, level: null, target: image.target.name, pixels };
    const key = JSON.stringify(print);
    const known = this.#answers.get(key);
    if (known === undefined) void this.#ask(key, print);
    return known ?? null;
  }

  /** Something was built: what was answered may be otherwise now. */
  forget(): void {
    this.#answers = new Map();
  }

  async #ask(key: string, print: PrintHash): Promise<void> {
    const answers = this.#answers;
    answers.set(key, null);
    const { reply } = await this.#link.ask('isBuilt', print);
    if ('problem' in reply || reply.ok.equal === null) return;
    answers.set(key, reply.ok.equal);
    this.#changed();
  }
}
