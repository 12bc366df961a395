/** The choice with the smallest edit distance to `word`; the earliest of equals, or `word` itself without choices. */
export function nearest(word: string, choices: readonly string[]): string {
  let best = word;
  let least = Number.POSITIVE_INFINITY;
  for (const choice of choices) {
    const distance = editDistance(word.toLowerCase(), choice.toLowerCase());
    if (distance < least) [best, least] = [choice, distance];
  }
  return best;
}

/** Insertions, removals, replacements and swaps of neighbors that turn `a` into `b`; no part is edited twice.
 *  [Damerau64] */
export function editDistance(a: string, b: string): number {
  // A pasted text needs no exact answer, and rows of it would cost its square.
  const [from, to] = [a.slice(0, 64), b.slice(0, 64)];
  let before: number[] = [];
  let above = Array.from({ length: to.length + 1 }, (_, j) => j);
  for (let i = 1; i <= from.length; i++) {
    const row = [i];
    for (let j = 1; j <= to.length; j++) {
      const cost = from[i - 1] === to[j - 1] ? 0 : 1;
      row[j] = Math.min(above[j] + 1, row[j - 1] + 1, above[j - 1] + cost);
      const swapped = i > 1 && j > 1 && from[i - 1] === to[j - 2] && from[i - 2] === to[j - 1];
      if (swapped) row[j] = Math.min(row[j], before[j - 2] + 1);
    }
    [before, above] = [above, row];
  }
  return above[to.length] + Math.max(a.length - from.length, b.length - to.length, 0);
}
