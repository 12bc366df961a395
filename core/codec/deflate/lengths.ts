/** Bits of the codes that write symbols in the least room, none longer than `longest`; 0 where a symbol is never written. Two of
 *  them at least must be.
 *  Huffman's lengths where they are short enough, else those of package-merge. [Huffman52; LarmoreHirschberg90] */
export function codeLengths(counts: ArrayLike<number>, longest: number): Uint8Array {
  const order = sortSymbols(counts);
  if (order.length < 2) throw new RangeError(`Expected 2 symbols or more but received ${order.length}`);
  const weights = new Uint32Array(order.length);
  for (let rank = 0; rank < order.length; rank++) weights[rank] = counts[order[rank]];
  let depths = huffmanDepths(weights);
  if (depths[0] > longest) depths = mergedDepths(weights, longest);
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

/** Depths of leaves in the tree of at most `longest` levels that has the least sum of weight times depth; `weights` ascend. Each
 *  of the lists holds the leaves and the pairs of the list before, in the order of their weights; of the last one the first 2n - 2
 *  are taken, and a leaf is as deep as the times it is taken. */
function mergedDepths(weights: Uint32Array, longest: number): Uint8Array {
  const leaves = weights.length;
  if (leaves > 2 ** longest) throw new RangeError(`Expected ${2 ** longest} symbols or fewer but received ${leaves}`);
  const room = 2 * leaves;
  /** Of each list, which of its items are leaves. */
  const areLeaves = new Uint8Array(longest * room);
  let sums = new Uint32Array(room);
  let before = new Uint32Array(room);
  let count = 0;
  for (let level = 0; level < longest; level++) {
    [sums, before] = [before, sums];
    const pairs = count >> 1;
    count = leaves + pairs;
    let leaf = 0;
    let pair = 0;
    let pairSum = pairs > 0 ? before[0] + before[1] : Number.POSITIVE_INFINITY;
    for (let item = 0; item < count; item++) {
      if (leaf < leaves && weights[leaf] <= pairSum) {
        sums[item] = weights[leaf++];
        areLeaves[level * room + item] = 1;
      } else {
        sums[item] = pairSum;
        pair++;
        pairSum = pair < pairs ? before[2 * pair] + before[2 * pair + 1] : Number.POSITIVE_INFINITY;
      }
    }
  }
  const depths = new Uint8Array(leaves);
  let taken = 2 * leaves - 2;
  for (let level = longest - 1; level >= 0; level--) {
    let leaf = 0;
    for (let item = 0; item < taken; item++) if (areLeaves[level * room + item] === 1) depths[leaf++]++;
    taken = 2 * (taken - leaf);
  }
  return depths;
}
