import { writeFileSync } from 'node:fs';

/** What became of one test. */
export interface Outcome {
  readonly name: string;
  /** Null where it passed. */
  readonly failure: string | null;
}

const tests: { readonly name: string; readonly body: () => Promise<void> }[] = [];

/** Adds a test. They run one after another, in the order in which they are added, in one workspace. */
export function test(name: string, body: () => Promise<void>): void {
  tests.push({ name, body });
}

/** Longest time of a test, and of what it waits for; a loaded machine may be ten times as slow as another. */
const TEST_MS = 240_000;

/** Runs every test and writes the outcomes to the file that the variable SIZEPROOF_OUTCOMES names. */
export async function runTests(): Promise<void> {
  const file = process.env.SIZEPROOF_OUTCOMES;
  if (file === undefined) throw new Error('Expected a file for the variable SIZEPROOF_OUTCOMES');
  const outcomes: Outcome[] = [];
  for (const { name, body } of tests) {
    const failure = await failureOf(body);
    outcomes.push({ name, failure });
    console.log(failure === null ? `passed ${name}` : `failed ${name}: ${failure}`);
    writeFileSync(file, JSON.stringify(outcomes));
  }
  if (outcomes.some((each) => each.failure !== null)) throw new Error('Some tests failed.');
}

/** Calls until the answer is neither null nor false, and answers it. */
export async function until<T>(what: string, ask: () => T | null | false | Promise<T | null | false>): Promise<T> {
  const end = Date.now() + TEST_MS / 2;
  for (;;) {
    const answer = await ask();
    if (answer !== null && answer !== false) return answer;
    if (Date.now() > end) throw new Error(`Waited in vain for ${what}`);
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
}

async function failureOf(body: () => Promise<void>): Promise<string | null> {
  let timer: NodeJS.Timeout | undefined;
  const late = new Promise<never>((_, reject) => {
    timer = setTimeout(() => reject(new Error('It took too long')), TEST_MS);
  });
  try {
    await Promise.race([body(), late]);
    return null;
  } catch (error) {
    return error instanceof Error ? (error.stack ?? error.message) : String(error);
  } finally {
    clearTimeout(timer);
  }
}
