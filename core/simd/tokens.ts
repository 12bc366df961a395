import { BLOCK_BYTES, OUT_BYTES, TOKENS, type Tokens } from '../codec/deflate/tokens.ts';
import { Machine } from './machine.ts';

/** Tokens of deflate by the kernels, compiled: what the plain ones make, byte for byte. */
export function createTokens(module: WebAssembly.Module): Tokens {
  const idle: Machine[] = [];
  return {
    open() {
      const machine = idle.pop() ?? new Machine(module);
      const { kernels } = machine;
      const block = machine.take(FRONT + BLOCK_BYTES + BEHIND) + FRONT;
      const out = machine.take(OUT_BYTES);
      const counts = machine.take(4 * (TOKENS + 3 * 256));
      const codes = machine.take(4 * TOKENS);
      const { addresses, bytes: all } = machine.views;
      let open = true;
      return {
        block: all.subarray(block, block + BLOCK_BYTES),
        out: all.subarray(out, out + OUT_BYTES),
        count(bytes, zeros) {
          kernels.countTokens(block, bytes, zeros, counts);
          return addresses.subarray(counts >> 2, (counts >> 2) + TOKENS);
        },
        write(bytes, zeros, table, bit) {
          addresses.set(table, codes >> 2);
          return kernels.writeTokens(block, bytes, zeros, codes, out, bit);
        },
        sum: (bytes, sum) => kernels.adler(block, bytes, sum) >>> 0,
        close() {
          if (!open) return;
          open = false;
          machine.giveBack();
          idle.push(machine);
        },
      };
    },
  };
}

/** A run looks at the byte before it. */
const FRONT = 64;

/** Whole vectors are read behind a block. */
const BEHIND = 16;
