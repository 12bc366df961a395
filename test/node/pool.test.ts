import * as fs from 'node:fs';
import { pathToFileURL } from 'node:url';
import { expect, test } from 'vitest';
import { temporaryFor } from '../../extension/node/files/temporary.ts';
import { defaultMemoryBytes, openMemoryGate } from '../../extension/node/workers/memory.ts';
import { runInWorkers } from '../../extension/node/workers/pool.ts';
import type { Outcome, TextureJob } from '../../extension/node/workers/texture-job.ts';
import { treatment } from '../fixtures/treatment.ts';
import { filesBelow, newFolder } from './folder.ts';
import { build, smallPng, told } from './project.ts';

const job = (texture: string, memoryBytes = 100): TextureJob => ({
  task: 'build',
  texture,
  image: { path: `/in/${texture}`, reference: texture, sha256: null },
  roughness: null,
  treatment: treatment(),
  outFolder: '/out',
  manifestPath: `/out/${texture}.mips.json`,
  within: '/out',
  base: null,
  memoryBytes,
});

/** A worker that does what a job's name says: holds memory for a while, fails, throws, or exits. */
const worker = `
import { parentPort } from 'node:worker_threads';
import { appendFileSync } from 'node:fs';
let admitted;
parentPort.on('message', async (message) => {
  if (message.kind === 'admitted') return admitted();
  const { texture, memoryBytes, outFolder } = message.job;
  if (texture.startsWith('exit')) process.exit(3);
  if (texture.startsWith('throw')) setTimeout(() => { throw new Error('as told'); });
  if (texture.startsWith('throw')) return;
  if (texture.startsWith('impatient')) await new Promise((done) => setTimeout(done, 300));
  parentPort.postMessage({ kind: 'admit', peakBytes: memoryBytes });
  if (texture.startsWith('impatient')) setTimeout(() => process.exit(5), 20);
  await new Promise((enter) => { admitted = enter; });
  if (texture.startsWith('late')) process.exit(4);
  appendFileSync(new URL('./log', import.meta.url), '+' + memoryBytes + '\\n');
  await new Promise((done) => setTimeout(done, texture.startsWith('long') ? 1000 : 20));
  appendFileSync(new URL('./log', import.meta.url), '-' + memoryBytes + '\\n');
  parentPort.postMessage({ kind: 'done', outcome: { kind: 'failed', problem: { code: 'stale', severity: 'error', values: { what: texture } } } });
});
`;

async function run(
  jobs: readonly TextureJob[],
  options: { workers?: number; memoryBytes?: number; cancel?: SharedArrayBuffer } = {},
) {
  const folder = newFolder({ 'worker.mjs': worker, log: '' });
  const outcomes: (Outcome | undefined)[] = jobs.map(() => undefined);
  const pool = runInWorkers({
    workerUrl: pathToFileURL(`${folder}/worker.mjs`),
    workers: 3,
    memoryBytes: 1000,
    cancel: new SharedArrayBuffer(4),
    ...options,
  });
  await pool(jobs, (index, outcome) => {
    expect(outcomes[index]).toBeUndefined();
    outcomes[index] = outcome;
  });
  const said = outcomes.map((each) =>
    each?.kind === 'failed' ? `${each.problem.code} ${Object.values(each.problem.values)}` : each?.kind,
  );
  let held = 0;
  let most = 0;
  for (const line of fs.readFileSync(`${folder}/log`, 'utf8').split('\n')) {
    held += Number(line);
    most = Math.max(most, held);
  }
  return { said, most };
}

test('each job has its outcome in its own place', async () => {
  const names = Array.from({ length: 12 }, (_, at) => `t${at}`);
  expect((await run(names.map((name) => job(name)))).said).toEqual(names.map((name) => `stale ${name}`));
});

test('no jobs need no worker', async () => {
  expect((await run([])).said).toEqual([]);
});

test('running jobs hold no more than the budget together, and one alone may hold all of it', async () => {
  const jobs = [600, 300, 300, 500, 1000, 100, 900].map((bytes, at) => job(`t${at}`, bytes));
  const { said, most } = await run(jobs);
  expect(said).toHaveLength(7);
  expect(most).toBeGreaterThan(300);
  expect(most).toBeLessThanOrEqual(1000);
});

test.each(['exit', 'throw', 'late'])('a worker that ends (%s) takes its own job with it and no other', async (end) => {
  const { said } = await run([job('a'), job(`${end} 1`, 900), job('b'), job(`${end} 2`, 900), job('c')], {
    workers: 2,
  });
  expect(said.map((each) => each?.split(' ')[0])).toEqual(['stale', 'worker-ended', 'stale', 'worker-ended', 'stale']);
  expect(said[1]).toMatch(/exit code|as told/);
});

test('a worker that ends while it waits for memory leaves none of it taken', async () => {
  const { said } = await run([job('long', 900), job('impatient', 900), job('b', 900), job('c', 900)], { workers: 2 });
  expect(said.map((each) => each?.split(' ')[0])).toEqual(['stale', 'worker-ended', 'stale', 'stale']);
});

test('jobs that have not begun when work is called off are not begun', async () => {
  const cancel = new SharedArrayBuffer(4);
  Atomics.store(new Int32Array(cancel), 0, 1);
  expect((await run([job('a'), job('b')], { cancel })).said).toEqual(['cancelled', 'cancelled']);
});

test('the gate lets in whoever came first, and a large one is not passed by', async () => {
  const gate = openMemoryGate(10);
  const order: string[] = [];
  const enter = (name: string, bytes: number) => gate.enter(bytes).then(() => order.push(name));
  await enter('small', 4);
  void enter('large', 9);
  void enter('tiny', 1);
  await new Promise((turn) => setImmediate(turn));
  expect(order).toEqual(['small']);
  gate.leave(4);
  await new Promise((turn) => setImmediate(turn));
  expect(order).toEqual(['small', 'large', 'tiny']);
  gate.leave(9);
  await enter('beyond the budget, while another runs', 1);
  gate.leave(1);
  gate.leave(1);
  await enter('beyond the budget, alone', 11);
  expect(order).toHaveLength(5);
});

test('the default budget is at most a quarter of the machine', async () => {
  const { totalmem } = await import('node:os');
  expect(defaultMemoryBytes()).toBeGreaterThan(0);
  expect(defaultMemoryBytes()).toBeLessThanOrEqual(totalmem() / 4);
});

test('what a worker that ended left half written is swept', async () => {
  const folder = newFolder({ 'a.png': smallPng(1) });
  const report = await build(folder, {
    run: async (jobs, done) => {
      fs.mkdirSync(`${folder}/built`);
      fs.writeFileSync(temporaryFor(`${folder}/built/a.1.png`), 'half');
      const problem = {
        code: 'worker-ended',
        severity: 'error',
        values: { reason: 'x' },
        path: jobs[0].image.path,
      } as const;
      done(0, { kind: 'failed', problem });
    },
  });
  expect(told(report, folder)).toEqual(['worker-ended a.png']);
  expect(filesBelow(`${folder}/built`)).toEqual({});
});
