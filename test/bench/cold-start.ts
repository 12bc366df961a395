import { readFileSync } from 'node:fs';
import { buildChain } from '../../core/chain/chain.ts';
import { createEngine } from '../../core/simd/engine.ts';
import { both, treatment } from '../fixtures/treatment.ts';

// Run by itself: the first chain of a process. Arguments: a file of RGBA codes, and the image's side. Prints milliseconds.

const [file, side] = process.argv.slice(2);
const codes = new Uint8Array(readFileSync(file));
const bytes = readFileSync(new URL('./engine.wasm', import.meta.url));
const extent = { width: Number(side), height: Number(side) };
const plain = treatment({ kernel: both('lanczos3'), fill: 'none' });

const start = performance.now();
const module = new WebAssembly.Module(bytes);
const compiled = performance.now();
buildChain({ kind: 'straight', extent, channels: 4, depth: 8, codes }, plain, { engine: createEngine(module) });
const end = performance.now();
console.log(JSON.stringify([compiled - start, end - compiled, end - start]));
