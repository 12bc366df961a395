import { Refusal } from '../../../core/problem.ts';
import { firstImage, type Opening } from '../../../core/proof/opening.ts';
import { FIRST_PRINT_BYTES, type FirstPrint } from '../../../core/protocol.ts';
import type { Platform } from '../platform.ts';
import type { TextureFacts } from './facts.ts';
import { HostBench } from './host-bench.ts';

/** Makes a texture's first print on the host's side, where the file is, while its page is still loading. Owns a worker, which
 *  goes as soon as the page has its print. */
export class FirstPrinter {
  readonly #texture: TextureFacts;
  readonly #platform: Platform;
  readonly #report: (error: unknown) => void;
  #bench: Promise<HostBench | null> | null = null;
  #made: { readonly key: string; readonly print: Promise<FirstPrint> } | null = null;
  #askers = 0;
  #timer: { dispose(): void } | null = null;

  constructor(texture: TextureFacts, platform: Platform, report: (error: unknown) => void) {
    this.#texture = texture;
    this.#platform = platform;
    this.#report = report;
  }

  /** Makes what a page asks for that was never open before, so that it is there when one asks. */
  begin(): void {
    this.#timer = this.#platform.after(UNASKED_MS, () => {
      if (this.#askers === 0) this.forget();
    });
    this.#attempt({ level: null, target: null }).catch(this.#report);
  }

  /** Null where the host makes none: it has no worker, or the file is too large or not what it should be; the page will hear why
   *  when it has the file itself. */
  async print(opening: Opening): Promise<FirstPrint | null> {
    this.#askers++;
    try {
      return await this.#attempt(opening);
    } catch (error) {
      this.#report(error);
      return null;
    } finally {
      if (--this.#askers === 0) this.forget();
    }
  }

  /** Lets the worker go. */
  forget(): void {
    this.#timer?.dispose();
    this.#timer = null;
    this.#made = null;
    const bench = this.#bench;
    this.#bench = null;
    bench?.then((each) => each?.stop()).catch(() => undefined);
  }

  async #attempt(opening: Opening): Promise<FirstPrint | null> {
    this.#bench ??= this.#start();
    const opened = this.#bench;
    try {
      const bench = await opened;
      const treatment = (await this.#texture.settings()).texture?.treatment ?? null;
      if (bench === null || treatment === null) return null;
      const header = await bench.header;
      const image = firstImage(header, treatment, opening, FIRST_PRINT_BYTES);
      const key = JSON.stringify([image, treatment]);
      if (this.#made?.key !== key) {
        const print = bench.print(treatment, image).then(({ picture, stats }) => ({
          header,
          treatment,
          image,
          picture,
          stats,
        }));
        this.#made = { key, print };
      }
      return await this.#made.print;
    } catch (error) {
      if (error instanceof Refusal || this.#bench !== opened) return null;
      throw error;
    }
  }

  async #start(): Promise<HostBench | null> {
    const { startBench } = this.#platform;
    if (startBench === null || (await this.#texture.byteCount()) > MOST_FILE_BYTES) return null;
    return new HostBench(startBench(), this.#texture.name, await this.#texture.bytes());
  }
}

/** A print that no page asks for is given up after this long. */
const UNASKED_MS = 10_000;

/** Larger files take longer to read than a page waits. */
const MOST_FILE_BYTES = 2 ** 26;
