import { choice, either, integer, Misfit, nothing, object, type Shape, text } from '../../../core/manifest/shape.ts';
import { refuse } from '../../../core/problem.ts';
import type { Opening } from '../../../core/proof/opening.ts';
import {
  type AdoptChange,
  type ExportOrder,
  type HostCall,
  type HostCalls,
  PROTOCOL,
  type PrintHash,
  type Question,
  type QuestionOf,
  type Request,
  type RequestOf,
} from '../../../core/protocol.ts';

/** Reads a message of a page, and trusts nothing in it. Throws Refusal: `bad-message`, or `page-outdated` for another version of
 *  the protocol. */
export function readRequest(message: unknown): Request {
  return readQuestion<HostCalls>(message, questions) as Request;
}

/** The same for the calls of any page, each with the shape of its question. */
export function readQuestion<Calls>(
  message: unknown,
  shapes: { readonly [K in keyof Calls]: Shape<QuestionOf<Calls, K>> },
): RequestOf<Calls> {
  const given = message as Readonly<Record<string, unknown>> | null;
  if (typeof given === 'object' && typeof given?.protocol === 'number' && given.protocol !== PROTOCOL) {
    refuse('page-outdated', { page: given.protocol, host: PROTOCOL });
  }
  const calls = Object.keys(shapes) as (keyof Calls & string)[];
  try {
    const { call, ...rest } = envelope(calls)(message, '');
    const question = (shapes[call] as Shape<unknown>)(rest.question, 'question');
    return { ...rest, call, question } as RequestOf<Calls>;
  } catch (error) {
    if (!(error instanceof Misfit)) throw error;
    return refuse('bad-message', { where: error.at || 'it', expected: error.expected });
  }
}

/** The id to answer under, where a message has one; null where nobody waits for an answer. */
export function requestId(message: unknown): number | null {
  const id = (message as { readonly id?: unknown } | null)?.id;
  return typeof id === 'number' && Number.isSafeInteger(id) ? id : null;
}

const anything: Shape<unknown> = (value) => value;

interface Envelope<Call> {
  readonly protocol: number;
  readonly kind: 'ask';
  readonly id: number;
  readonly call: Call;
  readonly question: unknown;
}

function envelope<Call extends string>(calls: readonly Call[]): Shape<Envelope<Call>> {
  return object<Envelope<Call>>({
    protocol: integer(PROTOCOL, PROTOCOL),
    kind: choice('ask'),
    id: integer(0, Number.MAX_SAFE_INTEGER),
    call: choice(...calls) as never,
    // An `optional` of anything would let the key be left out.
    question: anything as never,
  });
}

/** Characters of a dotted key; the longest has fewer than 40. */
const key = text(/^[A-Za-z0-9.-]{1,200}$/, 'a dotted key');

/** Images of this texture; a texture has 15 levels at most. */
const level = either<number | null>(nothing, integer(0, 15));
const target = either<string | null>(nothing, text(/^[^\p{Cc}]{1,240}$/u, 'the name of a target'));

/** What a page may put on the clipboard: 16 Mi characters. */
const COPY_LIMIT = 2 ** 24;

/** Bytes of a file that a page may write. */
const SAVE_LIMIT = 2 ** 29;

/** Characters of the settings to adopt, as JSON. */
const ADOPT_LIMIT = 2 ** 16;

const questions: { readonly [K in HostCall]: Shape<Question<K>> } = {
  open: nothing,
  firstPrint: object<Opening>({ level, target }),
  bytes: nothing,
  build: nothing,
  isBuilt: object<PrintHash>({
    use: choice('image', 'min', 'max', 'roughness'),
    level,
    target,
    pixels: text(/^[0-9a-f]{64}$/, 'a pixel hash'),
  }),
  adopt: object<AdoptChange>({ scope: choice('file', 'matching'), settings: plainSettings }),
  showSettings: object<{ key: string | null }>({ key: either<string | null>(nothing, key) }),
  copy: object<{ text: string }>({ text: shortText }),
  save: object<{ name: string; bytes: ArrayBuffer }>({
    name: text(/^(?!\.)[^\p{Cc}/\\:*?"<>|]{1,200}$/u, 'a file name'),
    bytes: fileBytes,
  }),
  reveal: nothing,
  report: nothing,
  export: object<ExportOrder>({ form: choice('sheet', 'page'), state: plainState }),
};

/** Characters of what a page keeps, as JSON. */
const STATE_LIMIT = 2 ** 18;

function shortText(value: unknown, at: string): string {
  if (typeof value !== 'string' || value.length > COPY_LIMIT) throw new Misfit(at, `up to ${COPY_LIMIT} characters`);
  return value;
}

function fileBytes(value: unknown, at: string): ArrayBuffer {
  if (value instanceof ArrayBuffer && value.byteLength <= SAVE_LIMIT) return value;
  throw new Misfit(at, `up to ${SAVE_LIMIT} bytes`);
}

/** An object of JSON values; what it may hold, reading the settings file that it makes will tell. */
function plainSettings(value: unknown, at: string): Readonly<Record<string, unknown>> {
  return plainObject(value, ADOPT_LIMIT) ?? misfit(at, 'an object of settings');
}

/** What a page keeps; which of it a sheet understands, core/export/look.ts says. */
function plainState(value: unknown, at: string): Readonly<Record<string, unknown>> {
  return plainObject(value, STATE_LIMIT) ?? misfit(at, 'what a page keeps');
}

function misfit(at: string, expected: string): never {
  throw new Misfit(at, expected);
}

/** A copy of an object of JSON values; null for anything else, and for more characters than `limit`. */
function plainObject(value: unknown, limit: number): Readonly<Record<string, unknown>> | null {
  const isObject = typeof value === 'object' && value !== null && !Array.isArray(value);
  const json = isObject ? jsonOf(value) : undefined;
  return json === undefined || json.length > limit ? null : JSON.parse(json);
}

/** Undefined for a ring, which messages may hold and JSON may not. */
function jsonOf(value: object): string | undefined {
  try {
    return JSON.stringify(value);
  } catch (error) {
    if (error instanceof TypeError) return undefined;
    throw error;
  }
}
