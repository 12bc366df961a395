/** What a bench hands to the report: tables to read, and figures to hold against targets. */
export interface Findings {
  readonly tables: readonly Table[];
  readonly figures: readonly Figure[];
}

export interface Table {
  readonly title: string;
  /** What is timed and what is not. */
  readonly says: string;
  readonly columns: readonly string[];
  readonly rows: readonly (readonly string[])[];
}

/** A number for one of the targets of targets.ts; in words why there is none, where it was not measured. */
export interface Figure {
  readonly target: string;
  readonly measured: number | { readonly missing: string };
}

/** Three digits are as many as such machines repeat. */
export function digits(value: number): string {
  if (!Number.isFinite(value)) return '-';
  const places = value === 0 ? 0 : Math.max(0, 2 - Math.floor(Math.log10(Math.abs(value))));
  return value.toFixed(Math.min(places, 4));
}

export function roundsText(rounds: number): string {
  return rounds === 1 ? 'one round' : `${rounds} rounds`;
}
