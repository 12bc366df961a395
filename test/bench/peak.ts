import { readFileSync, writeSync } from 'node:fs';
import { isMainThread } from 'node:worker_threads';

// Loaded ahead of a program: prints its peak of resident memory, in bytes, as it ends.

if (isMainThread) process.on('exit', () => writeSync(1, `${peakBytes()}\n`));

function peakBytes(): number {
  // The usual accounting of a process begins with what its parent held when it was forked; this one does not.
  if (process.platform === 'linux') {
    const found = /^VmHWM:\s+(\d+) kB$/m.exec(readFileSync('/proc/self/status', 'utf8'));
    if (found !== null) return Number(found[1]) * 1024;
  }
  return process.resourceUsage().maxRSS * 1024;
}
