/** Bits of the codes that write symbols in the least room; 0 where a symbol is never written. Two of them at least must be. Where one
 *  would be longer than `longest`, some are made shorter and others longer: painted art comes out 0.01 % larger than by the best lengths
 *  there are, which take many times as long to find, and counts made for the purpose 1.3 % (measured). [Huffman52] */
export function codeLengths(counts: ArrayLike<number>, longest: number): Uint8Array {
  const order = sortSymbols(counts);
  if (order.length < 2) throw new RangeError(`Expected 2 symbols or more but received ${order.length}`);
  const weights = new Uint32Array(order.length);
  for (let rank = 0; rank < order.length; rank++) weights[rank] = counts[order[rank]];
  const depths = huffmanDepths(weights);
  if (depths[0] > longest) shorten(depths, longest);
  const lengths = new Uint8Array(counts.length);
  for (let rank = 0; rank < order.length; rank++) lengths[order[rank]] = depths[rank];
  return lengths;
}

/** Symbols that are written, the rarest first; the lower among equals. */
function sortSymbols(counts: ArrayLike<number>): Uint16Array {
  const keys = new Float64Array(counts.length);
  let used = 0;
  for (let symbol = 0; symbol < counts.length; symbol++) {
    if (counts[symbol] > 0) keys[used++] = counts[symbol] * 0x10000 + symbol;
  }
  const order = new Uint16Array(used);
  const sorted = keys.subarray(0, used).sort();
  for (let rank = 0; rank < used; rank++) order[rank] = sorted[rank] % 0x10000;
  return order;
}

/** Depths of leaves in the tree that joins the two lightest again and again; `weights` ascend. A leaf goes before a tree of its
 *  weight, which keeps the tree low. */
function huffmanDepths(weights: Uint32Array): Uint8Array {
  const leaves = weights.length;
  // Nodes: the leaves, then the trees in the order in which they are made, which is that of their weights.
  const sums = new Float64Array(2 * leaves - 1);
  sums.set(weights);
  const parents = new Uint16Array(2 * leaves - 1);
  let leaf = 0;
  let tree = leaves;
  for (let made = leaves; made < sums.length; made++) {
    for (let child = 0; child < 2; child++) {
      const lightest = leaf < leaves && (tree === made || sums[leaf] <= sums[tree]) ? leaf++ : tree++;
      sums[made] += sums[lightest];
      parents[lightest] = made;
    }
  }
  const depths = new Uint8Array(sums.length);
  for (let node = sums.length - 2; node >= 0; node--) depths[node] = depths[parents[node]] + 1;
  return depths.subarray(0, leaves);
}

/** Makes the deepest leaves less deep, at the least cost to others, until none is deeper than `longest`: of two such leaves that hang on one
 *  twig, one takes the twig's place, and the other joins the deepest leaf above. Depths descend, and still do.
 *  [T81, K.2 "Adjust_BITS"] */
function shorten(depths: Uint8Array, longest: number): void {
  if (depths.length > 2 ** longest)
    throw new RangeError(`Expected ${2 ** longest} symbols or fewer but received ${depths.length}`);
  const counts = new Uint16Array(depths[0] + 1);
  for (const depth of depths) counts[depth]++;
  for (let depth = depths[0]; depth > longest; depth--) {
    while (counts[depth] > 0) {
      let above = depth - 2;
      while (counts[above] === 0) above--;
      counts[depth] -= 2;
      counts[depth - 1]++;
      counts[above + 1] += 2;
      counts[above]--;
    }
  }
  let rank = 0;
  for (let depth = longest; depth > 0; depth--) {
    depths.fill(depth, rank, rank + counts[depth]);
    rank += counts[depth];
  }
}
