import type { Findings } from './figure.ts';

/** What no bench here can measure yet. */
export async function benchLater(): Promise<Findings> {
  const missing = { missing: 'not measured by this benchmark yet' };
  const later = ['page-open', 'page-kernel'];
  return { tables: [], figures: later.map((target) => ({ target, measured: missing })) };
}
