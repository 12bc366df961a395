/** Filters rows of bytes for a PNG of 8 bits a sample or more. Gives the filter's number followed by the filtered bytes; the
 *  view is valid until the next row is filtered. `above` is the row before, zeros for the first one. */
export type RowFilter = (row: Uint8Array, above: Uint8Array) => Uint8Array;

/** Chooses the filter of each row by the minimum sum of absolute differences: the filtered bytes are taken as signed
 *  numbers and the filter with the smallest sum of their magnitudes wins, the lower number among equals.
 *  [PNG3, "Filter selection"] */
export function newAdaptiveFilter(rowBytes: number, texelBytes: number): RowFilter {
  // Each candidate carries its filter's number in front, so that the winner can be handed over as it is.
  const candidates = filters.map((_, type) => {
    const bytes = new Uint8Array(1 + rowBytes);
    bytes[0] = type;
    return bytes;
  });
  return (row, above) => {
    let best = 0;
    let bestSum = Number.POSITIVE_INFINITY;
    for (let type = 0; type < filters.length; type++) {
      filters[type](row, above, texelBytes, candidates[type]);
      const sum = sumMagnitudes(candidates[type], bestSum);
      if (sum < bestSum) {
        best = type;
        bestSum = sum;
      }
    }
    return candidates[best];
  };
}

/** Of the bytes behind the first, each 0..128. Stops soon after `limit` is reached, since the candidate has lost by then. */
function sumMagnitudes(candidate: Uint8Array, limit: number): number {
  let sum = 0;
  for (let at = 1; at < candidate.length && sum < limit; at++) {
    const byte = candidate[at];
    sum += byte < 128 ? byte : 256 - byte;
  }
  return sum;
}

/** Writes the filtered row behind `out[0]`. */
type Filter = (row: Uint8Array, above: Uint8Array, texelBytes: number, out: Uint8Array) => void;

/** In the order of their numbers. [PNG3, "Filter types for filter method 0"] */
const filters: readonly Filter[] = [none, sub, up, average, paeth];

function none(row: Uint8Array, _above: Uint8Array, _texelBytes: number, out: Uint8Array): void {
  out.set(row, 1);
}

function sub(row: Uint8Array, _above: Uint8Array, texelBytes: number, out: Uint8Array): void {
  out.set(row.subarray(0, texelBytes), 1);
  for (let at = texelBytes; at < row.length; at++) out[at + 1] = row[at] - row[at - texelBytes];
}

function up(row: Uint8Array, above: Uint8Array, _texelBytes: number, out: Uint8Array): void {
  for (let at = 0; at < row.length; at++) out[at + 1] = row[at] - above[at];
}

function average(row: Uint8Array, above: Uint8Array, texelBytes: number, out: Uint8Array): void {
  for (let at = 0; at < texelBytes; at++) out[at + 1] = row[at] - (above[at] >> 1);
  for (let at = texelBytes; at < row.length; at++) {
    out[at + 1] = row[at] - ((row[at - texelBytes] + above[at]) >> 1);
  }
}

function paeth(row: Uint8Array, above: Uint8Array, texelBytes: number, out: Uint8Array): void {
  // Without a texel to the left the predictor is the byte above.
  for (let at = 0; at < texelBytes; at++) out[at + 1] = row[at] - above[at];
  for (let at = texelBytes; at < row.length; at++) {
    out[at + 1] = row[at] - nearest(row[at - texelBytes], above[at], above[at - texelBytes]);
  }
}

/** Of left, above and corner, the one nearest to left + above - corner; the earlier one among equals. */
function nearest(left: number, above: number, corner: number): number {
  const toLeft = Math.abs(above - corner);
  const toAbove = Math.abs(left - corner);
  const toCorner = Math.abs(left + above - corner - corner);
  if (toLeft <= toAbove && toLeft <= toCorner) return left;
  return toAbove <= toCorner ? above : corner;
}
