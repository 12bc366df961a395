import type * as vscode from 'vscode';

/** Which changes were looked at, by what both sides hold: a mark goes when a file changes again, and is there again when it is
 *  as it was. Kept with the workspace. */
export class LookedAt {
  readonly #store: vscode.Memento;
  readonly #marks: Set<string>;

  constructor(store: vscode.Memento) {
    this.#store = store;
    const kept = store.get<unknown>(KEY);
    this.#marks = new Set(Array.isArray(kept) ? kept.filter((each) => typeof each === 'string') : []);
  }

  has(content: string): boolean {
    return this.#marks.has(content);
  }

  mark(contents: readonly string[], looked: 'yes' | 'no'): void {
    for (const content of contents) {
      // Said again, it is the latest.
      this.#marks.delete(content);
      if (looked === 'yes') this.#marks.add(content);
    }
    void this.#store.update(KEY, [...this.#marks].slice(-MOST_MARKS));
  }
}

const KEY = 'review.lookedAt';

/** The latest ones; some hundred bytes each. */
const MOST_MARKS = 20_000;
