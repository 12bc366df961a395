import { mkdirSync, writeFileSync } from 'node:fs';
import { loadavg } from 'node:os';
import { dirname } from 'node:path';
import { parseArgs } from 'node:util';
import { benchAccuracy } from './accuracy.ts';
import { benchBuilds } from './builds.ts';
import { type Cases, fullCases, smokeCases } from './cases.ts';
import { benchChains } from './chains.ts';
import { benchCold } from './cold.ts';
import { readEnvironment } from './environment.ts';
import type { Figure, Findings, Table } from './figure.ts';
import { benchFolder } from './folder.ts';
import { benchLimits } from './limits.ts';
import { benchMemory } from './memory.ts';
import { benchPage } from './page.ts';
import { benchPhases } from './phases.ts';
import { benchProject } from './project.ts';
import { writeReport } from './report.ts';
import { benchReview } from './review.ts';

// Run by `npm run bench`, bundled, from the top of the tree.

const benches: Readonly<Record<string, (cases: Cases) => Promise<Findings>>> = {
  limits: ({ chains }) => benchLimits(chains[0].rounds),
  chains: benchChains,
  phases: benchPhases,
  builds: benchBuilds,
  folder: benchFolder,
  project: benchProject,
  memory: benchMemory,
  accuracy: benchAccuracy,
  cold: benchCold,
  page: benchPage,
  review: benchReview,
};

const { values } = parseArgs({
  options: {
    /** Everything once and small; goes to dist. */
    smoke: { type: 'boolean', default: false },
    /** Benches by name, with commas; goes to dist. */
    only: { type: 'string' },
    /** A sentence at the top of the report, about what else the machine was doing. */
    note: { type: 'string' },
    /** Where the report goes. */
    out: { type: 'string' },
  },
});

const asked = values.only?.split(',') ?? Object.keys(benches);
const unknown = asked.filter((name) => !Object.hasOwn(benches, name));
if (unknown.length > 0) {
  console.error(`Expected some of ${Object.keys(benches).join(', ')} for --only but received ${unknown.join(', ')}.`);
  process.exit(1);
}
const whole = !values.smoke && values.only === undefined;
const out = values.out ?? (whole ? 'test/bench/RESULTS.md' : 'dist/bench/RESULTS.md');
const [before] = loadavg();
const note =
  values.note ?? (values.smoke ? 'A smoke run: images are tiny, and no number below says anything about speed.' : null);
mkdirSync(dirname(out), { recursive: true });
const tables: Table[] = [];
const figures: Figure[] = [];
let report = '';
for (const name of asked) {
  const start = performance.now();
  const found = await benches[name](values.smoke ? smokeCases : fullCases);
  tables.push(...found.tables);
  figures.push(...found.figures);
  // After each, so that a run that is ended early leaves what it measured.
  report = writeReport(readEnvironment(before, note), figures, tables);
  writeFileSync(out, report);
  console.error(`${name}: ${((performance.now() - start) / 1000).toFixed(1)} s`);
}
console.log(`${report}\nWritten to ${out}.`);
// Some peers leave threads behind that would keep the process.
process.exit(0);
