import { decodeTable } from '../color/transfer.ts';
import { isCoded } from '../proof/sample.ts';
import type { Picture } from '../proof/want.ts';
import { type Extent, maxCode } from '../raster/raster.ts';
import { JUST_SEEN, labDistance } from './lab.ts';

/** A rectangle of texels. */
export interface Box {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
}

/** How two pictures of one extent differ. Distances are OKLab's where both hold color; for numbers they are shares of their
 *  range, for normals half the distance of the unit vectors, so that opposite ones are 1 apart. */
export interface Difference {
  /** Texels with any other code. */
  readonly texels: number;
  /** The same as a share of all, 0..1. */
  readonly share: number;
  /** Of `texels`: transparent on both sides, so that nobody sees them. */
  readonly hidden: number;
  /** Of `texels`: not hidden, and with another alpha. */
  readonly alpha: number;
  /** Of `texels`: not hidden, and with another code beside alpha. */
  readonly color: number;
  /** Largest difference of any channel of any texel that is not hidden, in 8-bit codes. */
  readonly worstCodes: number;
  /** Mean over all texels of that texel's largest difference, hidden ones counted as 0, in 8-bit codes. */
  readonly meanCodes: number;
  readonly worst: number;
  readonly mean: number;
  /** The texel of `worst`; the first one in reading order. */
  readonly at: { readonly x: number; readonly y: number };
  /** Share of all texels that are at least `JUST_SEEN` apart. */
  readonly seen: number;
  /** Bounds of all texels that differ; null where none does. */
  readonly box: Box | null;
}

/** A picture, and the least alpha code that passes its test where alpha is a mask; null where it is none. */
export interface Seen {
  readonly picture: Picture;
  readonly passing: number | null;
}

/** Compares two pictures texel by texel. Channels and depths may differ: gray stands for three equal channels, a missing alpha
 *  for the largest code. Color is compared as it is seen on black and on white, whichever shows more; alpha of a mask
 *  after its test. `mark` is told of every texel that differs, with its distance, or null for a hidden one. RangeError for unequal extents. */
export function comparePictures(
  before: Seen,
  after: Seen,
  mark?: (x: number, y: number, distance: number | null) => void,
): Difference {
  const { width, height } = before.picture.extent;
  checkExtents(before.picture.extent, after.picture.extent);
  const one = openReader(before);
  const other = openReader(after);
  const measure = chooseMeasure(before.picture, after.picture);
  const alike = sameForm(before.picture, after.picture);
  const isHidden = one.hasAlpha && other.hasAlpha;
  const counts = { texels: 0, hidden: 0, alpha: 0, color: 0, seen: 0 };
  let [worstCodes, sumCodes, worst, sum] = [0, 0, 0, 0];
  let [x, y] = [0, 0];
  let [left, top, right, bottom] = [width, height, -1, -1];
  for (let row = 0, texel = 0; row < height; row++) {
    for (let column = 0; column < width; column++, texel++) {
      if (alike && sameCodes(before.picture, after.picture, texel)) continue;
      one.read(texel);
      other.read(texel);
      const codes = widestStep(one.codes, other.codes, 0, 4);
      if (codes === 0) continue;
      counts.texels++;
      if (column < left) left = column;
      if (column > right) right = column;
      if (row < top) top = row;
      bottom = row;
      if (isHidden && one.codes[3] === 0 && other.codes[3] === 0) {
        counts.hidden++;
        mark?.(column, row, null);
        continue;
      }
      if (one.codes[3] !== other.codes[3]) counts.alpha++;
      if (widestStep(one.codes, other.codes, 0, 3) > 0) counts.color++;
      const distance = measure(one, other);
      if (distance > worst) [worst, x, y] = [distance, column, row];
      if (distance >= JUST_SEEN) counts.seen++;
      if (codes > worstCodes) worstCodes = codes;
      sumCodes += codes;
      sum += distance;
      mark?.(column, row, distance);
    }
  }
  const texels = width * height;
  const { seen, ...rest } = counts;
  return {
    ...rest,
    share: rest.texels / texels,
    worstCodes: worstCodes / WIDE,
    meanCodes: sumCodes / WIDE / texels,
    worst,
    mean: sum / texels,
    at: { x, y },
    seen: seen / texels,
    box: right < 0 ? null : { left, top, width: right - left + 1, height: bottom - top + 1 },
  };
}

/** 16-bit codes of an 8-bit one. */
const WIDE = 257;

/** One texel, told in one form whatever the picture's. */
interface Reader {
  read(texel: number): void;
  /** Red, green, blue and alpha as 16-bit codes. */
  readonly codes: Int32Array;
  /** The same as linear light, or as shares of the range where they are no color; alpha as it is tested. */
  readonly values: Float64Array;
  readonly hasAlpha: boolean;
  readonly premultiplied: boolean;
}

function openReader({ picture, passing }: Seen): Reader {
  const { channels, depth, codes: stored, meaning } = picture;
  const max = maxCode(depth);
  const wide = depth === 8 ? WIDE : 1;
  const codes = new Int32Array(4).fill(max * wide);
  const values = new Float64Array(4).fill(1);
  const tables = Array.from({ length: channels }, (_, channel) =>
    isCoded(picture, channel) ? decodeTable(depth, 'srgb') : null,
  );
  // Gray goes to all three; the second of two channels stands where alpha does.
  const places = channels >= 3 ? [[0], [1], [2], [3]] : [[0, 1, 2], [3]];
  const alpha = meaning.alpha;
  return {
    codes,
    values,
    hasAlpha: alpha !== null,
    premultiplied: meaning.premultiplied,
    read(texel) {
      for (let channel = 0; channel < channels; channel++) {
        const code = stored[texel * channels + channel];
        const isTested = channel === alpha && passing !== null;
        const value = isTested ? (code >= passing ? 1 : 0) : (tables[channel]?.[code] ?? code / max);
        for (const place of places[channel]) {
          codes[place] = code * wide;
          values[place] = value;
        }
      }
    },
  };
}

type Measure = (one: Reader, other: Reader) => number;

function chooseMeasure(before: Picture, after: Picture): Measure {
  if (before.meaning.color && after.meaning.color) return colorDistance;
  const [one, other] = [before.meaning.normal, after.meaning.normal];
  if (one !== null && other !== null) {
    // A second channel stands in alpha's place.
    const place = (channel: number, { channels }: Picture): number => (channels === 2 && channel === 1 ? 3 : channel);
    const axes = (normal: NonNullable<typeof one>, picture: Picture): Axes => [
      place(normal.x, picture),
      place(normal.y, picture),
      normal.z === null ? null : place(normal.z, picture),
    ];
    const used = [...axes(one, before), ...axes(other, after)];
    // Of two channels nothing is left over; gray would stand for three.
    const beside = Math.min(before.channels, after.channels) < 3 ? [] : [0, 1, 2, 3].filter((at) => !used.includes(at));
    return normalDistance(axes(one, before), axes(other, after), beside);
  }
  return (a, b) => widestStep(a.values, b.values, 0, 4);
}

/** On black color counts times alpha; on white what alpha lets through is added. */
function colorDistance(one: Reader, other: Reader): number {
  const [a, b] = [one.values, other.values];
  const [fore, back] = [one.premultiplied ? 1 : a[3], other.premultiplied ? 1 : b[3]];
  const [red, green, blue] = [a[0] * fore, a[1] * fore, a[2] * fore];
  const [otherRed, otherGreen, otherBlue] = [b[0] * back, b[1] * back, b[2] * back];
  const black = labDistance(red, green, blue, otherRed, otherGreen, otherBlue);
  if (a[3] === 1 && b[3] === 1) return black;
  const [clear, otherClear] = [1 - a[3], 1 - b[3]];
  const white = labDistance(
    red + clear,
    green + clear,
    blue + clear,
    otherRed + otherClear,
    otherGreen + otherClear,
    otherBlue + otherClear,
  );
  return Math.max(black, white);
}

type Axes = readonly [x: number, y: number, z: number | null];

/** Whatever is packed beside the normal counts by itself. */
function normalDistance(before: Axes, after: Axes, beside: readonly number[]): Measure {
  const [a, b] = [new Float64Array(3), new Float64Array(3)];
  return (one, other) => {
    unit(one.values, before, a);
    unit(other.values, after, b);
    const [dx, dy, dz] = [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
    let widest = Math.sqrt(dx * dx + dy * dy + dz * dz) / 2;
    for (const at of beside) widest = Math.max(widest, Math.abs(one.values[at] - other.values[at]));
    return widest;
  };
}

function unit(values: Float64Array, [x, y, z]: Axes, out: Float64Array): void {
  const [across, up] = [2 * values[x] - 1, 2 * values[y] - 1];
  const ahead = z === null ? Math.sqrt(Math.max(0, 1 - across * across - up * up)) : 2 * values[z] - 1;
  const length = Math.sqrt(across * across + up * up + ahead * ahead);
  if (length < 1e-6) {
    out.set([0, 0, 1]);
    return;
  }
  out[0] = across / length;
  out[1] = up / length;
  out[2] = ahead / length;
}

function widestStep(one: ArrayLike<number>, other: ArrayLike<number>, from: number, to: number): number {
  let widest = 0;
  for (let place = from; place < to; place++) {
    const step = Math.abs(one[place] - other[place]);
    if (step > widest) widest = step;
  }
  return widest;
}

function sameForm(one: Picture, other: Picture): boolean {
  return one.channels === other.channels && one.depth === other.depth;
}

function sameCodes({ codes, channels }: Picture, other: Picture, texel: number): boolean {
  for (let at = texel * channels, end = at + channels; at < end; at++) {
    if (codes[at] !== other.codes[at]) return false;
  }
  return true;
}

function checkExtents(one: Extent, other: Extent): void {
  if (one.width === other.width && one.height === other.height) return;
  const [expected, received] = [one, other].map(({ width, height }) => `${width}x${height}`);
  throw new RangeError(`Expected pictures of one extent, ${expected}, but received ${received}`);
}
