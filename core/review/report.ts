import { byteText } from '../figures.ts';
import { sayHarm } from './harms.ts';
import type { Impact } from './impact.ts';
import type { Review, SideFigures } from './review.ts';
import type { SizeReview } from './sizes.ts';
import { percent, sayVerdict, type Verdict } from './verdict.ts';
import { seenAt } from './visible.ts';

/** One texture of a report, as much of it as is known: after a glance there is no review. */
export interface ReportEntry {
  readonly path: string;
  readonly oldPath: string;
  readonly status: string;
  readonly verdict: Verdict;
  readonly impact: Impact;
  readonly review: Review | null;
  readonly manifest: 'none' | 'fresh' | 'stale';
  /** Sentences about limits that are passed and what else is wrong. */
  readonly remarks: readonly string[];
}

/** A row of a report, all of it text for people. */
export interface ReportRow {
  /** One decimal. */
  readonly score: string;
  readonly status: string;
  /** `new.png (was old.png)` for a renamed file. */
  readonly texture: string;
  /** The verdict's sentence. */
  readonly verdict: string;
  /** Where it is seen; empty where nothing was compared. */
  readonly seen: string;
  /** What harm it does. */
  readonly harms: readonly string[];
  /** What else changed: coverage, luminance, memory, the file; settings, a stale manifest. */
  readonly notes: readonly string[];
  readonly remarks: readonly string[];
}

/** The most harmful first, then by what is seen; equal ones by path. */
export function sortByImpact<T extends { readonly path: string; readonly impact: Impact }>(entries: readonly T[]): T[] {
  return [...entries].sort((a, b) => b.impact.score - a.impact.score || (a.path < b.path ? -1 : 1));
}

export function reportRow(entry: ReportEntry): ReportRow {
  const { path, oldPath, status, verdict, impact, review, manifest, remarks } = entry;
  return {
    score: impact.score.toFixed(1),
    status,
    texture: oldPath === path ? path : `${path} (was ${oldPath})`,
    verdict: sayVerdict(verdict),
    seen: review === null ? '' : seenAt(review.sizes),
    harms: impact.harms.map(sayHarm),
    notes: [...(review === null ? [] : notesOf(review)), ...(manifest === 'stale' ? [STALE] : [])],
    remarks,
  };
}

const STALE = 'its manifest is stale: build again';

function notesOf({ before, after, sizes, forms, verdict, settings }: Review): string[] {
  if (before === null || after === null) return [];
  // The verdict says what it is about itself.
  const silent = ['metadata', 'tagged', 'form'].includes(verdict.kind)
    ? []
    : forms.filter(({ what }) => what !== 'extent');
  return [
    ...silent.map(({ what, before: was, after: is }) => `${what}: ${was || 'none'} to ${is || 'none'}`),
    ...(verdict.kind === 'treated' ? [] : settings.map(({ key }) => `setting ${key} changed`)),
    ...moved('coverage', sizes, ({ coverage }) => coverage),
    ...moved('mean luminance', sizes, ({ luminance }) => luminance),
    ...moved('normal length', sizes, ({ normalLength }) => normalLength),
    ...bytes('memory', before, after, ({ memoryBytes }) => memoryBytes),
    ...bytes('file', before, after, ({ fileBytes }) => fileBytes),
  ];
}

/** The size at which a figure moved most, where it moved by more than a hundredth of what it was. */
function moved(
  name: string,
  sizes: readonly SizeReview[],
  of: (figures: NonNullable<SizeReview['before']>) => number | null,
): string[] {
  let worst: { readonly change: number; readonly text: string } = { change: 0.01, text: '' };
  for (const { image, before, after, extent } of sizes) {
    if (before === null || after === null || extent.width * extent.height < 64) continue;
    const [was, is] = [of(before), of(after)];
    if (was === null || is === null || was === is) continue;
    const change = was === 0 ? 1 : Math.abs(is / was - 1);
    const where = 'level' in image ? `level ${image.level}` : image.target;
    if (change > worst.change) worst = { change, text: `${name} ${percent(was)} to ${percent(is)} at ${where}` };
  }
  return worst.text === '' ? [] : [worst.text];
}

function bytes(name: string, before: SideFigures, after: SideFigures, of: (side: SideFigures) => number): string[] {
  const [was, is] = [of(before), of(after)];
  return was === is ? [] : [`${name} ${byteText(was)} to ${byteText(is)}`];
}
