import type { FormChange } from './form.ts';

/** What a change is, in one word. */
export type VerdictKind = keyof typeof verdicts;

/** What a change is, with the numbers that its sentence names. */
export interface Verdict {
  readonly kind: VerdictKind;
  readonly values: Readonly<Record<string, string | number>>;
}

/** One English template a kind; `{name}` is filled from the verdict's values. */
export const verdicts = {
  same: 'Identical file.',
  encoded: 'Same pixels, re-encoded.',
  metadata: 'Same pixels; only metadata changed: {what}.',
  tagged: 'Same pixels; only color chunks changed: {what}.',
  form: 'Same picture in another form: {what}.',
  hidden: 'Only color under alpha 0 changed: {share} of the texels.',
  alpha: 'Only alpha changed: {share} of the texels, worst {codes} codes, mean {meanCodes}, in {box}.',
  texels:
    '{share} of the texels changed, worst {codes} codes ({distance} OKLab), mean {meanCodes} ({meanDistance}), in {box}.',
  numbers: '{share} of the texels changed, worst {codes} codes, mean {meanCodes}, in {box}.',
  moved: 'Moved by {dx}, {dy} texels{round}; {share} of what both show is equal.',
  cropped: 'Another extent, {before} to {after}, with the same texels at {dx}, {dy}.',
  resized: 'Resized from {before} to {after}, a factor of {factor}: the same picture (mean {meanDistance} OKLab).',
  replaced: 'Another extent, {before} to {after}, and another picture.',
  added: 'Added: {what}.',
  removed: 'Removed: {what}.',
  treated: 'The file is the same; its treatment changed: {what}.',
  unread: 'Changed, not compared yet: {what}.',
  unreadable: 'Cannot be compared: {what}',
  link: 'A file became something else: {what}.',
} as const;

/** The verdict's sentence in English. */
export function sayVerdict(verdict: Verdict): string {
  return fill(verdicts[verdict.kind], verdict.values);
}

function fill(template: string, values: Verdict['values']): string {
  return template.replace(/\{(\w+)\}/g, (_, name: string) => String(values[name] ?? `{${name}}`));
}

/** `depth 8 bits to 16 bits; metadata none to tEXt`. */
export function sayForms(changes: readonly FormChange[]): string {
  return changes
    .map(({ what, before, after }) =>
      what === 'palette order'
        ? 'the palette is in another order'
        : `${what} ${before || 'none'} to ${after || 'none'}`,
    )
    .join('; ');
}

/** `tEXt added`, where it is said already what it is. */
export function sayForm({ before, after }: FormChange): string {
  if (before === '') return `${after} added`;
  return after === '' ? `${before} removed` : `${before} to ${after}`;
}

/** A measured number as people read it: two significant digits, or whole ones from 10 on. */
export function figure(value: number): string {
  return value >= 10 ? String(Math.round(value)) : String(Number(value.toPrecision(2)));
}

/** A share as people read it: `under 0.1 %` rather than 0. */
export function percent(share: number): string {
  if (share > 0 && share < 0.001) return 'under 0.1 %';
  return `${Math.round(share * 1000) / 10} %`;
}
