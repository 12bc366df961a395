import { peekImage } from '../codec/peek.ts';
import { readHeadStructure } from '../codec/png/structure.ts';
import type { ColorChunk } from '../codec/source.ts';
import { byteText } from '../figures.ts';
import { type Problem, Refusal, say } from '../problem.ts';
import type { Treatment } from '../treatment/treatment.ts';
import { describeFile } from './describe.ts';
import { type Harm, harmsOfFacts, type Impact, impactOf } from './impact.ts';
import { describeTreatments } from './treatments.ts';
import type { Verdict } from './verdict.ts';

/** What is known of one side of a change before any picture is decoded. */
export interface GlanceSide {
  /** Equal for equal content: an object's id, or a hash. */
  readonly id: string;
  /** Bytes of the file; null where nobody asked. */
  readonly fileBytes: number | null;
  /** The first bytes of the file, or all of it; null where they were not read. */
  readonly head: Uint8Array | null;
  /** Why it cannot be had. */
  readonly problem: Problem | null;
  /** Null where the settings cannot be read. */
  readonly treatment: Treatment | null;
}

/** What can be said at once of a change. */
export interface Glance {
  readonly verdict: Verdict;
  /** Of what is known by now; a review may find more. */
  readonly impact: Impact;
  /** Whether a review could say more: not where the files are equal, or one is missing. */
  readonly settled: boolean;
}

/** Judges a change by ids and headers alone, so that thousands are listed in seconds; `null` for a side that is not there.
 *  Nothing is decoded. */
export function glanceAt(path: string, before: GlanceSide | null, after: GlanceSide | null): Glance {
  const problems = [problemOf('before', path, before), problemOf('after', path, after)].flatMap((each) => each ?? []);
  if (problems.length > 0) {
    const what = problems.map(({ side, problem }) => `${side}: ${say(problem)}`).join(' ');
    const harmful = problems.some(({ side }) => side === 'after');
    const harms: Harm[] = harmful ? [{ name: 'unreadable', severity: 1, image: null }] : [];
    return { verdict: { kind: 'unreadable', values: { what } }, impact: impactOf(harms, []), settled: true };
  }
  if (before === null || after === null) {
    const kind = before === null ? 'added' : 'removed';
    const head = headOf(path, before ?? after);
    const what = head === null ? sizeOf(before ?? after) : describeFile(head);
    const score = kind === 'added' ? 10 : 50;
    return { verdict: { kind, values: { what } }, impact: { score, harms: [] }, settled: false };
  }
  if (before.id === after.id) return sameFile(before, after);
  const [was, is] = [headOf(path, before), headOf(path, after)];
  const harms = was === null || is === null ? [] : harmsOfFacts(was, is);
  const what =
    was === null || is === null || describeFile(was) === describeFile(is)
      ? `${is === null ? '' : `${describeFile(is)}, `}${sizeOf(before)} to ${sizeOf(after)}`
      : `${describeFile(was)} to ${describeFile(is)}`;
  const { score } = impactOf(harms, []);
  // A change that nobody has looked at may be anything.
  return { verdict: { kind: 'unread', values: { what } }, impact: { score: score + 5, harms }, settled: false };
}

function sameFile(before: GlanceSide, after: GlanceSide): Glance {
  const nothing = impactOf([], []);
  if (before.treatment === null || after.treatment === null) {
    return { verdict: { kind: 'same', values: {} }, impact: nothing, settled: true };
  }
  const what = describeTreatments(before.treatment, after.treatment);
  if (what === '') return { verdict: { kind: 'same', values: {} }, impact: nothing, settled: true };
  return { verdict: { kind: 'treated', values: { what } }, impact: { score: 5, harms: [] }, settled: false };
}

interface Head {
  readonly format: 'png' | 'tga';
  readonly extent: { readonly width: number; readonly height: number };
  readonly channels: 1 | 2 | 3 | 4;
  readonly depth: 8 | 16;
  readonly palette: number | null;
  readonly transparent: boolean;
  readonly colorChunks: readonly ColorChunk[];
}

/** What the head of a file tells; null where it was not read. Throws nothing: what is wrong was said before. */
function headOf(path: string, side: GlanceSide | null): Head | null {
  if (side === null || side.head === null) return null;
  const { format, extent, channels, depth, indexed } = peekImage(side.head, path);
  const structure = format === 'png' ? readHeadStructure(side.head) : null;
  return {
    format,
    extent,
    channels,
    depth,
    palette: indexed && structure?.palette ? structure.palette.length / 4 : null,
    transparent: channels === 2 || channels === 4,
    colorChunks: structure?.colorChunks ?? [],
  };
}

function problemOf(
  side: 'before' | 'after',
  path: string,
  given: GlanceSide | null,
): { readonly side: 'before' | 'after'; readonly problem: Problem } | null {
  if (given === null) return null;
  if (given.problem !== null) return { side, problem: given.problem };
  try {
    headOf(path, given);
    return null;
  } catch (error) {
    if (error instanceof Refusal) return { side, problem: error.problem };
    throw error;
  }
}

function sizeOf(side: GlanceSide | null): string {
  return side?.fileBytes == null ? 'unknown size' : byteText(side.fileBytes);
}
