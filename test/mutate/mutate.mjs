// Puts one-line faults into a copy of the tree, one at a time, and expects the law that each one breaks to fail. A fault that
// goes unnoticed, and one whose text is no longer in its file, end with exit code 1.
//
//   node test/mutate/mutate.mjs [WORD...]    only faults whose law or file holds a word

import { spawn } from 'node:child_process';
import { cpSync, mkdtempSync, readdirSync, readFileSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { availableParallelism, tmpdir } from 'node:os';
import { dirname, join, sep } from 'node:path';
import { fileURLToPath } from 'node:url';
import { faults } from './faults.mjs';

const root = dirname(dirname(dirname(fileURLToPath(import.meta.url))));

/** What is copied: sources, and what the tests read beside them. */
const COPIED = ['core', 'test', 'extension', 'package.json', 'tsconfig.base.json'];
/** Property tests repeat this seed, so that a fault is found on every run or on none. */
const SEED = '20';
/** A fault may make a loop endless. */
const LIMIT_MS = 180_000;

const words = process.argv.slice(2);
const chosen = faults.filter(({ law, file }) => words.every((word) => `${law} ${file}`.includes(word)));
if (chosen.length === 0) {
  console.error(`No fault holds ${words.join(' and ')}.`);
  process.exit(2);
}

const copies = Array.from({ length: Math.min(2, availableParallelism()) }, copyTree);
process.on('exit', () => {
  for (const copy of copies) rmSync(copy, { recursive: true, force: true });
});
for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => process.exit(130));

// Without a fault every law must hold, or its failing would mean nothing.
const sound = await runTests(copies[0], [...new Set(chosen.map(({ tests }) => tests))], '');
if (sound.failed > 0 || sound.passed === 0) {
  console.error(`Laws fail without any fault:\n${sound.names.join('\n') || sound.text}`);
  process.exit(1);
}

const results = new Map();
const queue = [...chosen];
await Promise.all(copies.map(work));

let missed = 0;
for (const fault of chosen) {
  const { verdict, detail } = results.get(fault);
  if (verdict !== 'caught') missed++;
  console.log(
    `${verdict.padEnd(8)} ${fault.law.padEnd(58)} ${fault.file}${detail === '' ? '' : `\n         ${detail}`}`,
  );
}
console.log(`${chosen.length - missed} of ${chosen.length} faults caught.`);
process.exit(missed > 0 ? 1 : 0);

async function work(copy) {
  for (let fault = queue.shift(); fault !== undefined; fault = queue.shift())
    results.set(fault, await tryFault(copy, fault));
}

async function tryFault(copy, { file, find, replace, tests, name }) {
  const path = join(copy, file);
  const before = readFileSync(path, 'utf8');
  const count = before.split(find).length - 1;
  if (count !== 1) return { verdict: 'no text', detail: `Found ${count} times, not once: ${find}` };
  writeFileSync(
    path,
    before.replace(find, () => replace),
  );
  try {
    const { failed, passed, text } = await runTests(copy, [tests], name ?? '');
    if (failed > 0) return { verdict: 'caught', detail: '' };
    // No test failed: none noticed, or the fault does not even compile, which proves nothing.
    return passed > 0
      ? { verdict: 'MISSED', detail: `${tests} ${name ?? ''} holds all the same.` }
      : { verdict: 'no run', detail: text };
  } finally {
    writeFileSync(path, before);
  }
}

function copyTree() {
  const copy = mkdtempSync(join(tmpdir(), 'sizeproof-mutate-'));
  for (const entry of readdirSync(root)) {
    if (!COPIED.includes(entry)) continue;
    const filter = (source) => !source.split(sep).includes('node_modules');
    cpSync(join(root, entry), join(copy, entry), { recursive: true, filter });
  }
  symlinkSync(join(root, 'node_modules'), join(copy, 'node_modules'), 'junction');
  symlinkSync(join(root, 'test', 'node_modules'), join(copy, 'test', 'node_modules'), 'junction');
  return copy;
}

/** Runs vitest on some files of a copy: how many tests failed and passed, and their names. */
function runTests(copy, files, name) {
  const vitest = join(root, 'node_modules', 'vitest', 'vitest.mjs');
  const report = join(copy, 'report.json');
  const only = name === '' ? [] : ['-t', name];
  rmSync(report, { force: true });
  const args = [
    vitest,
    'run',
    '--config',
    'test/vitest.config.ts',
    '--reporter=json',
    `--outputFile=${report}`,
    ...only,
    ...files,
  ];
  return new Promise((resolve) => {
    const child = spawn(process.execPath, args, {
      cwd: copy,
      env: { ...process.env, SEED },
      stdio: ['ignore', 'pipe', 'pipe'],
    });
    let text = '';
    let isLate = false;
    for (const stream of [child.stdout, child.stderr]) stream.on('data', (chunk) => (text += chunk));
    const timer = setTimeout(() => {
      isLate = true;
      child.kill('SIGKILL');
    }, LIMIT_MS * files.length);
    child.on('close', () => {
      clearTimeout(timer);
      // An endless loop is noticed too.
      resolve(isLate ? { failed: 1, passed: 0, names: ['out of time'], text } : readReport(report, text));
    });
  });
}

function readReport(path, text) {
  let report;
  try {
    report = JSON.parse(readFileSync(path, 'utf8'));
  } catch {
    return { failed: 0, passed: 0, names: [], text: text.slice(-2000) };
  }
  const failing = report.testResults.flatMap((file) =>
    file.assertionResults.filter(({ status }) => status === 'failed'),
  );
  const broken = report.testResults.filter((file) => file.status === 'failed' && file.assertionResults.length === 0);
  return {
    failed: failing.length,
    passed: report.numPassedTests,
    names: failing.map(({ fullName }) => fullName),
    text: broken
      .map((file) => file.message)
      .join('\n')
      .slice(0, 500),
  };
}
