/** Samples that clamping changed, per stored channel. Counted only where a value lies outside by more than `slack` of the
 *  range, which is what float32 sums of up to some fifty taps leave of a constant 0 or 1: 2^-20 is 16 roundings of 2^-24. */
export interface Clipped {
  readonly below: number[];
  readonly above: number[];
}

export const CLIP_SLACK = 2 ** -20;

export function newClipped(channels: number): Clipped {
  return { below: new Array<number>(channels).fill(0), above: new Array<number>(channels).fill(0) };
}

export function addClipped(total: Clipped, part: Clipped): void {
  part.below.forEach((count, channel) => {
    total.below[channel] += count;
  });
  part.above.forEach((count, channel) => {
    total.above[channel] += count;
  });
}
