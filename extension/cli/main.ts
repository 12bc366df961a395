import { version } from '../../package.json';
import { slashed } from '../node/files/node-disk.ts';
import { runCommand } from './run.ts';

const cancel = new SharedArrayBuffer(4);
const flag = new Int32Array(cancel);

let stop: () => void = () => undefined;
const stopped = new Promise<void>((done) => {
  stop = done;
});

for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) {
  process.on(signal, () => {
    // The second time there is no more waiting: files are whole at every instant, and the next build sweeps up.
    if (Atomics.exchange(flag, 0, 1) === 1) process.exit(130);
    stop();
  });
}

process.exitCode = await runCommand(process.argv.slice(2), version, {
  folder: slashed(process.cwd()),
  env: process.env,
  stdout: process.stdout,
  stderr: process.stderr,
  isCancelled: () => Atomics.load(flag, 0) === 1,
  cancel,
  stopped,
});
