import { hashPixels } from '../codec/pixels.ts';
import type { SourceHeader } from '../codec/source.ts';
import { sameSettings } from '../manifest/settings.ts';
import { type Cancel, Cancelled, type Ports } from '../port.ts';
import { type Problem, Refusal, say } from '../problem.ts';
import { expandIndexed, maxCode } from '../raster/raster.ts';
import type { Treatment } from '../treatment/treatment.ts';
import { describeFile } from './describe.ts';
import { comparePictures, type Difference } from './difference.ts';
import { compareForms, compareMetadata, type FormChange, sameImageData } from './form.ts';
import { type Facts, type Harm, harmsOfFacts, harmsOfSizes, type Impact, impactOf } from './impact.ts';
import { JUST_SEEN } from './lab.ts';
import { findMove } from './move.ts';
import { findScale } from './scale.ts';
import { pairSizes, reviewSize, type SizeReview } from './sizes.ts';
import {
  checkPeak,
  holdsSource,
  makeSubject,
  type OpenedSide,
  openSide,
  type ReviewSide,
  type Subject,
  seenSource,
} from './subject.ts';
import { compareTreatments, describeTreatments, type SettingChange } from './treatments.ts';
import { figure, percent, sayForm, sayForms, type Verdict } from './verdict.ts';

/** One side as a review is given it: a file with its treatment, nothing (added or removed), or why it cannot be had. */
export type SideGiven = ReviewSide | null | { readonly problem: Problem };

/** What is known of one side's file. */
export interface SideFigures {
  readonly format: SourceHeader['format'];
  readonly extent: SourceHeader['extent'];
  readonly channels: SourceHeader['channels'];
  readonly depth: SourceHeader['depth'];
  /** Colors of the palette; null where there is none. */
  readonly palette: number | null;
  /** `sRGB 0`, `iCCP Display P3`, ... */
  readonly colorChunks: readonly string[];
  readonly fileBytes: number;
  /** Bytes of the shipped levels on the GPU, as the texture's KTX2 holds them. */
  readonly memoryBytes: number;
}

/** Before and after of one texture, at all its sizes. */
export interface Review {
  readonly verdict: Verdict;
  /** What changed about the form of the file. */
  readonly forms: readonly FormChange[];
  /** What changed about its treatment. */
  readonly settings: readonly SettingChange[];
  /** Of the source texels, where extents are equal; null otherwise, and where a side is missing. */
  readonly difference: Difference | null;
  readonly sizes: readonly SizeReview[];
  readonly before: SideFigures | null;
  readonly after: SideFigures | null;
  readonly impact: Impact;
  /** What is wrong with a side; the rest of the review says what it can. */
  readonly problems: readonly { readonly side: 'before' | 'after'; readonly problem: Problem }[];
}

export interface ReviewOptions {
  /** Bytes that the review may hold; a side that needs more is refused, in place. */
  readonly memoryBytes: number;
  /** Waits until the bytes may be held. */
  readonly admit?: (peakBytes: number) => Promise<void>;
}

/** Compares two versions of a texture: the files, the texels, and every size that their treatments make of them. What is wrong
 *  with a side is part of the answer. Throws Cancelled. */
export async function reviewTexture(
  before: SideGiven,
  after: SideGiven,
  ports: Ports,
  cancel: Cancel,
  { memoryBytes, admit = async () => undefined }: ReviewOptions,
): Promise<Review> {
  const problems: Review['problems'][number][] = [];
  const note = async <T>(side: 'before' | 'after', act: () => T | Promise<T>): Promise<T | null> => {
    try {
      return await act();
    } catch (error) {
      if (!(error instanceof Refusal)) throw error;
      problems.push({ side, problem: error.problem });
      return null;
    }
  };
  const open = (side: 'before' | 'after', given: SideGiven): Promise<OpenedSide | null> | null => {
    if (given === null) return null;
    if ('problem' in given) return note(side, () => refuseAgain(given.problem));
    return note(side, () => {
      const opened = openSide(given, ports);
      checkPeak(opened.peakBytes, memoryBytes);
      return opened;
    });
  };
  const [was, is] = [await open('before', before), await open('after', after)];
  const figures = { before: was && figuresOf(was), after: is && figuresOf(is) };
  const bare: Omit<Review, 'verdict' | 'impact'> = {
    forms: [],
    settings: [],
    difference: null,
    sizes: [],
    ...figures,
    problems,
  };
  if (before === null || after === null || was === null || is === null) {
    // A file that is added must still be whole.
    if (was === null && is !== null && problems.length === 0) {
      await admit(is.peakBytes);
      await note('after', () => makeSubject(is, ports, cancel));
    }
    return oneSided(before, after, bare);
  }
  const sameFile = sameBytes(was.side.bytes, is.side.bytes);
  const sameTreatment = sameSettings(was.side.treatment, is.side.treatment);
  if (sameFile && sameTreatment) return { ...bare, verdict: { kind: 'same', values: {} }, impact: impactOf([], []) };
  const peakBytes = was.peakBytes + is.peakBytes;
  if (peakBytes > memoryBytes) await note('after', () => checkPeak(peakBytes, memoryBytes));
  if (problems.length > 0) return oneSided(before, after, bare);
  await admit(peakBytes);
  const one = await note('before', () => makeSubject(was, ports, cancel));
  const other = await note('after', () => makeSubject(is, ports, cancel));
  if (one === null || other === null) return oneSided(before, after, { ...bare, problems });
  return compareSubjects(one, other, { ...bare, problems }, sameFile, ports, cancel);
}

/** Compares two sides that could be read. */
function compareSubjects(
  one: Subject,
  other: Subject,
  bare: Omit<Review, 'verdict' | 'impact'>,
  sameFile: boolean,
  ports: Ports,
  cancel: Cancel,
): Review {
  const metadata = compareMetadata(one.side.bytes, other.side.bytes);
  const forms = [...compareForms(one.header, other.header), ...(metadata === null ? [] : [metadata])];
  const equalExtents =
    one.header.extent.width === other.header.extent.width && one.header.extent.height === other.header.extent.height;
  const sizes: SizeReview[] = [];
  for (const pair of pairSizes(one, other)) {
    if (cancel.cancelled) throw new Cancelled();
    sizes.push(reviewSize(pair));
  }
  // Mostly level 0 is the source itself, and has been compared.
  const [first] = sizes;
  const isDone = first !== undefined && holdsSource(one) && holdsSource(other);
  const compare = () => (isDone ? first.difference : comparePictures(seenSource(one), seenSource(other)));
  const difference = equalExtents ? compare() : null;
  const harms: Harm[] = [...harmsOfFacts(factsOf(one), factsOf(other)), ...harmsOfSizes(sizes)];
  const verdict = sameFile
    ? treated(one.side.treatment, other.side.treatment)
    : judge(one, other, forms, difference, ports);
  const settings = compareTreatments(one.side.treatment, other.side.treatment);
  return { ...bare, verdict, forms, settings, difference, sizes, impact: impactOf(harms, sizes) };
}

function judge(
  one: Subject,
  other: Subject,
  forms: readonly FormChange[],
  difference: Difference | null,
  ports: Ports,
): Verdict {
  if (difference === null) return judgeExtents(one, other, ports);
  if (difference.texels === 0) return judgeForms(one, other, forms, ports);
  if (difference.texels === difference.hidden) return { kind: 'hidden', values: { share: percent(difference.share) } };
  const { worstCodes, meanCodes, worst, mean, box } = difference;
  const values = {
    share: percent(difference.share),
    codes: figure(worstCodes),
    meanCodes: figure(meanCodes),
    distance: figure(worst),
    meanDistance: figure(mean),
    box: box === null ? '' : `${box.width}x${box.height} at ${box.left}, ${box.top}`,
  };
  if (difference.color === 0) return { kind: 'alpha', values };
  const move = findMove(seenSource(one).picture, seenSource(other).picture);
  if (move !== null) {
    const { dx, dy, wrapped, share } = move;
    return { kind: 'moved', values: { dx, dy, round: wrapped ? ' round the edges' : '', share: percent(share) } };
  }
  const isColor = seenSource(one).picture.meaning.color && seenSource(other).picture.meaning.color;
  return { kind: isColor ? 'texels' : 'numbers', values };
}

/** The pictures are equal; what about the files? */
function judgeForms(one: Subject, other: Subject, forms: readonly FormChange[], { newHash }: Ports): Verdict {
  const essential = forms.filter(({ what }) => !PASSING.includes(what));
  const samePixels = hashPixels(one.raster, newHash) === hashPixels(other.raster, newHash);
  if (!samePixels || essential.length > 0) return { kind: 'form', values: { what: sayForms(forms) } };
  const tags = forms.filter(({ what }) => what === 'color chunks');
  if (tags.length > 0) return { kind: 'tagged', values: { what: tags.map(sayForm).join(', ') } };
  const metadata = forms.filter(({ what }) => what === 'metadata');
  if (metadata.length > 0 && sameImageData(one.side.bytes, other.side.bytes)) {
    return { kind: 'metadata', values: { what: metadata.map(sayForm).join(', ') } };
  }
  return { kind: 'encoded', values: {} };
}

/** Form changes that leave pixels and their meaning alone. */
const PASSING: readonly FormChange['what'][] = ['color chunks', 'metadata', 'interlacing', 'format'];

/** Share of its spread that a picture may be off and still be the same one, resized by any kernel, in code space or without
 *  regard to alpha. Ours, measured on the demo's textures: resized by four kernels to a quarter, half and three quarters they
 *  are off by 0.02 to 0.4, a sprite of 16 texels by up to 0.5; another picture of theirs by 0.87 and more. */
const SAME_PICTURE = 0.5;

function judgeExtents(one: Subject, other: Subject, ports: Ports): Verdict {
  const [before, after] = [one, other].map(({ header: { extent } }) => `${extent.width}x${extent.height}`);
  const move = findMove(seenSource(one).picture, seenSource(other).picture);
  if (move !== null) return { kind: 'cropped', values: { before, after, dx: move.dx, dy: move.dy } };
  const scale = findScale(one, other, ports);
  if (scale === null || scale.mean > Math.max(JUST_SEEN, SAME_PICTURE * scale.spread))
    return { kind: 'replaced', values: { before, after } };
  return {
    kind: 'resized',
    values: { before, after, factor: figure(scale.factor), meanDistance: figure(scale.mean) },
  };
}

function treated(before: Treatment, after: Treatment): Verdict {
  return { kind: 'treated', values: { what: describeTreatments(before, after) } };
}

function oneSided(before: SideGiven, after: SideGiven, bare: Omit<Review, 'verdict' | 'impact'>): Review {
  const { problems } = bare;
  if (problems.length > 0) {
    const what = problems.map(({ side, problem }) => `${side}: ${say(problem)}`).join(' ');
    // A side before that cannot be read does not ship.
    const harmful = problems.some(({ side }) => side === 'after');
    const harms: Harm[] = harmful ? [{ name: 'unreadable', severity: 1, image: null }] : [];
    return { ...bare, verdict: { kind: 'unreadable', values: { what } }, impact: impactOf(harms, []) };
  }
  const kind = before === null ? 'added' : 'removed';
  const figures = bare.after ?? bare.before;
  const what = figures === null ? (after === null && before === null ? 'nothing' : 'a file') : describeFile(figures);
  return { ...bare, verdict: { kind, values: { what } }, impact: { score: ONE_SIDED[kind], harms: [] } };
}

/** Between what cannot be seen and a change of half of all texels. */
const ONE_SIDED = { added: 10, removed: 50 } as const;

function figuresOf({ image: { header }, side, memoryBytes }: OpenedSide): SideFigures {
  const { format, extent, channels, depth, indexed, colorChunks } = header;
  return {
    format,
    extent,
    channels,
    depth,
    palette: indexed === null ? null : indexed.palette.length / 4,
    colorChunks: colorChunks.map(({ name, value }) => `${name} ${value}`),
    fileBytes: side.bytes.length,
    memoryBytes,
  };
}

function factsOf({ header, raster }: Subject): Facts {
  const { extent, depth, colorChunks, channels } = header;
  const whole = raster.kind === 'indexed' ? expandIndexed(raster) : raster;
  let transparent = false;
  if (channels === 2 || channels === 4) {
    const opaque = maxCode(whole.depth);
    for (let at = channels - 1; at < whole.codes.length && !transparent; at += channels) {
      transparent = whole.codes[at] !== opaque;
    }
  }
  return { extent, depth, transparent, colorChunks };
}

function sameBytes(one: Uint8Array, other: Uint8Array): boolean {
  return one.length === other.length && one.every((byte, at) => byte === other[at]);
}

function refuseAgain(problem: Problem): never {
  throw new Refusal(problem);
}
