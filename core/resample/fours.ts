/** A row's sum as every engine makes it: four texels in float32, (a + b) + (c + d), fours in double precision from the left. A last
 *  four that is short has zeros. */
export function sumByFours(texels: number, value: (texel: number) => number): number {
  const at = (texel: number): number => (texel < texels ? value(texel) : 0);
  let sum = 0;
  for (let x = 0; x < texels; x += 4) {
    const front = Math.fround(value(x) + at(x + 1));
    sum += Math.fround(front + Math.fround(at(x + 2) + at(x + 3)));
  }
  return sum;
}
