/** Undoes a row filter in place. Both rows hold `step` zeros before their first byte, so that the texel left of the first
 *  one is there to read; `end` is where the row stops. `type` is 0..4.
 *  [PNG3, 9.2 "Filter types for filter method 0"] */
export function unfilterRow(type: number, row: Uint8Array, above: Uint8Array, step: number, end: number): void {
  if (type === 1) addLeft(row, step, end);
  else if (type === 2) addAbove(row, above, step, end);
  else if (type === 3) addAverage(row, above, step, end);
  else if (type === 4) addPaeth(row, above, step, end);
}

/** Filter types are 0..LAST_FILTER. */
export const LAST_FILTER = 4;

function addLeft(row: Uint8Array, step: number, end: number): void {
  for (let at = step; at < end; at++) row[at] += row[at - step];
}

function addAbove(row: Uint8Array, above: Uint8Array, step: number, end: number): void {
  for (let at = step; at < end; at++) row[at] += above[at];
}

function addAverage(row: Uint8Array, above: Uint8Array, step: number, end: number): void {
  for (let at = step; at < end; at++) row[at] += (row[at - step] + above[at]) >> 1;
}

function addPaeth(row: Uint8Array, above: Uint8Array, step: number, end: number): void {
  for (let at = step; at < end; at++) {
    const left = row[at - step];
    const over = above[at];
    const corner = above[at - step];
    // Distances of left + over - corner from each of the three; the nearest predicts, left before over before corner.
    const toLeft = Math.abs(over - corner);
    const toOver = Math.abs(left - corner);
    const toCorner = Math.abs(left + over - corner - corner);
    row[at] += toLeft <= toOver && toLeft <= toCorner ? left : toOver <= toCorner ? over : corner;
  }
}
