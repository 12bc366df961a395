/** A place in a text: line and column count from 1, columns in UTF-16 units. */
export interface Spot {
  readonly line: number;
  readonly column: number;
}

/** Finds the place of an offset. A line ends with LF, CRLF or CR. */
export function spotFinder(text: string): (offset: number) => Spot {
  const starts = [0];
  for (const end of text.matchAll(/\r\n|\r|\n/g)) starts.push(end.index + end[0].length);
  return (offset) => {
    let [low, high] = [0, starts.length - 1];
    while (low < high) {
      const middle = (low + high + 1) >> 1;
      if (starts[middle] <= offset) low = middle;
      else high = middle - 1;
    }
    return { line: low + 1, column: offset - starts[low] + 1 };
  };
}
