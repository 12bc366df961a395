const float = new Float64Array(1);
const bits = new BigInt64Array(float.buffer);

/** How many doubles lie between two numbers of one sign. */
export function ulpsBetween(a: number, b: number): number {
  float[0] = a;
  const first = bits[0];
  float[0] = b;
  const distance = Number(first - bits[0]);
  return Math.abs(distance);
}

/** The next float32 above (1) or below (-1) a positive float32. */
export function nextFloat(value: number, direction: 1 | -1): number {
  const single = Float32Array.of(value);
  new Uint32Array(single.buffer)[0] += direction;
  return single[0];
}
