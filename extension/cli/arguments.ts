import { defaultParams, findKernel, kernels } from '../../core/kernel/table.ts';
import { type Problem, Refusal, refuse } from '../../core/problem.ts';
import { nearest } from '../../core/treatment/text/nearest.ts';
import type { KernelChoice } from '../../core/treatment/treatment.ts';
import { type CommandName, commands, type OptionEntry, type OptionName, options } from './commands.ts';

/** A command line, understood. */
export interface Arguments {
  readonly command: CommandName | 'help' | 'version';
  /** As they were typed. */
  readonly paths: readonly string[];
  readonly settings: string | null;
  readonly out: string | null;
  readonly sourceRoot: string | null;
  readonly proof: ProofArguments;
  readonly markdown: string | null;
  /** Workers; `null` leaves it to the machine. */
  readonly jobs: number | null;
  /** Bytes; `null` leaves it to the machine. */
  readonly memoryBytes: number | null;
  readonly flags: ReadonlySet<OptionName>;
}

/** What `proof` is to write. */
export interface ProofArguments {
  readonly sheet: string | null;
  readonly html: string | null;
  /** Null leaves it to the texture. */
  readonly kernels: readonly KernelChoice[] | null;
  readonly at: string | null;
  readonly keep: 'all' | 'middle' | null;
}

/** Understands a command line, or says all that is wrong with it. `words` are the arguments behind the program's name. */
export function readArguments(words: readonly string[]): Arguments | readonly Problem[] {
  const problems: Problem[] = [];
  const note = <T>(act: () => T): T | undefined => {
    try {
      return act();
    } catch (error) {
      if (!(error instanceof Refusal)) throw error;
      problems.push(error.problem);
      return undefined;
    }
  };
  const command = note(() => commandOf(words));
  const values = new Map<OptionName, string>();
  const paths: string[] = [];
  let open = true;
  const rest = [...words];
  for (let word = rest.shift(); word !== undefined; word = rest.shift()) {
    if (open && word === '--') open = false;
    else if (open && word.startsWith('-') && word !== '-') note(() => takeOption(word ?? '', rest, command, values));
    else paths.push(word);
  }
  if (command === undefined) return problems;
  const isCommand = command !== 'help' && command !== 'version';
  if (isCommand) paths.shift();
  const jobs = note(() => readJobs(values.get('jobs')));
  const memoryBytes = note(() => readMemory(values.get('memory')));
  const compared = note(() => readKernels(values.get('kernels')));
  const keep = note(() => readKeep(values.get('keep')));
  if (isCommand && !values.has('help')) note(() => checkCount(command, paths));
  if (command === 'review' && !values.has('help')) note(() => checkReview(values, paths));
  for (const other of ['plan', 'json'] as const) {
    if (values.has('watch') && values.has(other)) {
      note(() => refuse('options-exclude', { first: '--watch', second: `--${other}` }));
    }
  }
  if (command === 'proof' && !values.has('help') && !values.has('sheet') && !values.has('html')) {
    note(() => refuse('proof-nowhere', {}));
  }
  if (problems.length > 0) return problems;
  return {
    command: values.has('help') ? 'help' : values.has('version') ? 'version' : command,
    paths,
    settings: values.get('settings') ?? null,
    out: values.get('out') ?? null,
    sourceRoot: values.get('source-root') ?? null,
    proof: {
      sheet: values.get('sheet') ?? null,
      html: values.get('html') ?? null,
      kernels: compared ?? null,
      at: values.get('at') ?? null,
      keep: keep ?? null,
    },
    markdown: values.get('markdown') ?? null,
    jobs: jobs ?? null,
    memoryBytes: memoryBytes ?? null,
    flags: new Set(values.keys()),
  };
}

/** The first word that is no option and no option's value. */
function commandOf(words: readonly string[]): CommandName | 'help' | 'version' {
  const first = words[0];
  if (first === undefined || first === '--help') return 'help';
  if (first === '--version') return 'version';
  const found = commands.find((each) => each.name === first);
  if (found !== undefined) return found.name;
  const names = commands.map((each) => each.name);
  return refuse('unknown-command', { given: first, nearest: nearest(first, names) });
}

function takeOption(
  word: string,
  rest: string[],
  command: CommandName | 'help' | 'version' | undefined,
  values: Map<OptionName, string>,
): void {
  const [given, attached] = splitOnce(word);
  const known: readonly (OptionEntry & { readonly name: OptionName })[] = options;
  const here = known.filter(
    (each) => command === undefined || command === 'help' || command === 'version' || each.commands.includes(command),
  );
  const option = here.find((each) => `--${each.name}` === given);
  if (option === undefined) {
    const names = here.map((each) => `--${each.name}`);
    refuse('unknown-option', { given, nearest: nearest(given, names) });
  }
  if (option.value === null) {
    if (attached !== null) refuse('option-value', { expected: 'no value', option: given, received: attached });
    values.set(option.name, '');
    return;
  }
  const value = attached ?? rest.shift();
  if (value === undefined || value === '') {
    refuse('option-value', { expected: option.value, option: given, received: 'nothing' });
  }
  values.set(option.name, value);
}

function splitOnce(word: string): [option: string, value: string | null] {
  const cut = word.indexOf('=');
  return cut < 0 ? [word, null] : [word.slice(0, cut), word.slice(cut + 1)];
}

function readJobs(text: string | undefined): number | null {
  if (text === undefined) return null;
  const count = Number(text);
  if (/^\d+$/.test(text) && count >= 1 && count <= 256) return count;
  return refuse('option-value', { expected: 'an integer 1..256', option: '--jobs', received: text });
}

function readMemory(text: string | undefined): number | null {
  if (text === undefined) return null;
  const found = /^(\d+(?:\.\d+)?)\s*(MiB|GiB)?$/i.exec(text);
  const unit = found?.[2]?.toLowerCase();
  const bytes = Math.floor(Number(found?.[1]) * (unit === 'gib' ? 2 ** 30 : unit === 'mib' ? 2 ** 20 : 1));
  if (found !== null && bytes >= 1 && bytes <= Number.MAX_SAFE_INTEGER) return bytes;
  return refuse('option-value', { expected: 'a size such as 512MiB or 2GiB', option: '--memory', received: text });
}

function readKernels(text: string | undefined): readonly KernelChoice[] | null {
  if (text === undefined) return null;
  return text.split(',').map((word) => {
    const name = word.trim();
    const kernel = findKernel(name);
    if (kernel !== undefined) return { name, params: defaultParams(kernel) };
    const names = kernels.map((each) => each.name).join(', ');
    return refuse('option-value', { expected: `some of ${names}`, option: '--kernels', received: name || 'nothing' });
  });
}

function readKeep(text: string | undefined): 'all' | 'middle' | null {
  if (text === undefined) return null;
  if (text === 'all' || text === 'middle') return text;
  return refuse('option-value', { expected: 'all or middle', option: '--keep', received: text });
}

function checkCount(command: CommandName, paths: readonly string[]): void {
  const entry = commands.find((each) => each.name === command);
  if (entry !== undefined && paths.length < entry.least) refuse('missing-argument', { command, what: entry.takes });
  if (command === 'init' && paths.length > 1) {
    refuse('option-value', { expected: 'one folder at most', option: 'init', received: paths.join(' ') });
  }
  if (command === 'proof' && paths.length > 1) {
    refuse('option-value', { expected: 'one texture', option: 'proof', received: paths.join(' ') });
  }
}

function checkReview(values: ReadonlyMap<OptionName, string>, paths: readonly string[]): void {
  if (values.has('files') && values.has('staged')) refuse('options-exclude', { first: '--files', second: '--staged' });
  const received = paths.length === 0 ? 'nothing' : paths.join(' ');
  if (values.has('files')) {
    if (paths.length !== 2) refuse('option-value', { expected: 'two files', option: '--files', received });
  } else if (values.has('staged')) {
    if (paths.length > 0) refuse('option-value', { expected: 'no range', option: '--staged', received });
  } else if (paths.length > 1) {
    refuse('option-value', { expected: 'one range at most', option: 'review', received });
  }
}
