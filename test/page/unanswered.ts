import type { Page } from 'playwright-core';

/** Runs in the page before its script: `window.unanswered` holds, for each of its workers, the keys of what that was asked and has
 *  not answered. */
export function watchWorkers(): void {
  const stage = window as unknown as { unanswered: Set<string>[] };
  stage.unanswered = [];
  const file = 'the file';
  const Plain = window.Worker;
  window.Worker = class extends Plain {
    readonly #open = new Set<string>();

    constructor(url: string | URL, options?: WorkerOptions) {
      super(url, options);
      stage.unanswered.push(this.#open);
      // Before the page hears it, which may ask for more at once.
      this.addEventListener('message', ({ data }) => this.#open.delete(data.key ?? file));
    }

    override postMessage(message: { readonly wants?: readonly { readonly key: string }[] }, transfer: never): void {
      // What was wanted before and is wanted no more is left undone.
      this.#open.clear();
      if (message.wants === undefined) this.#open.add(file);
      else for (const { key } of message.wants) this.#open.add(key);
      super.postMessage(message, transfer);
    }
  };
}

/** Waits until the page asks for nothing more and every print is painted: for all the numbers. */
export async function waitForRest(page: Page): Promise<void> {
  await page.evaluate(async () => {
    const stages = (root: Document | ShadowRoot): Element[] =>
      Array.from(root.querySelectorAll('*')).flatMap((element) => [
        ...(element.localName === 'print-stage' ? [element] : []),
        ...(element.shadowRoot === null ? [] : stages(element.shadowRoot)),
      ]);
    const { unanswered } = window as unknown as { unanswered: Set<string>[] };
    const isResting = () =>
      unanswered.every((each) => each.size === 0) &&
      stages(document).every((each) => each.hasAttribute('data-painted'));
    // What was answered is drawn in the next frame, which may ask for more.
    for (let still = 0; still < 3; still = isResting() ? still + 1 : 0) await new Promise(requestAnimationFrame);
  });
}
