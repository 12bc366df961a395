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

// Who reads the output may have read enough and be gone, as `head` is: what is left is said to nobody, and the work goes on.
for (const stream of [process.stdout, process.stderr]) {
  stream.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code !== 'EPIPE') throw error;
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
