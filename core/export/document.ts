import type { Hash } from '../port.ts';
import { encodeUtf8 } from '../treatment/paths/utf8.ts';
import { base64, base64OfHex } from './base64.ts';

/** What `npm run build` made of a page, as text; the doors read it from dist/page. */
export interface PageCode {
  /** Run once the whole document has been read. It finds what the page carries by `webview/link/carried.ts`. */
  readonly script: string;
  /** The worker's code, which the page starts from a blob. */
  readonly worker: string;
  readonly style: string;
}

/** Something that a page carries: plain JSON, or bytes. It is never run. */
export type CarriedBlock =
  | { readonly id: string; readonly json: unknown }
  | { readonly id: string; readonly bytes: Uint8Array };

/** The block that every page carries of itself: its worker's code. */
export const WORKER_BLOCK = 'page-worker';

/** One HTML file that is a whole page: its code, and what it is about in blocks that no browser executes. It reaches nothing
 *  outside itself: its policy names its one script and its one style by their hashes and forbids every connection.
 *
 *      documentOf({ title, language: 'en', code, blocks: [{ id: 'review', json: facts }, { id: 'before', bytes }] }, newHash)
 *
 *  makes the page of a review as it makes that of a proof; that page's script then asks `carriedJson(document, 'review')` and
 *  `carriedBytes(document, 'before')`. Equal arguments give equal texts. Throws RangeError for an id that is no name, or one
 *  that is there twice. */
export function documentOf(
  page: {
    readonly title: string;
    /** As `lang` of HTML takes it. */
    readonly language: string;
    readonly code: PageCode;
    readonly blocks: readonly CarriedBlock[];
  },
  newHash: () => Hash,
): string {
  const { code } = page;
  const script = inert(code.script);
  const style = code.style.replace(/<\//g, '<\\/');
  const blocks: readonly CarriedBlock[] = [...page.blocks, { id: WORKER_BLOCK, json: code.worker }];
  checkIds(blocks.map(({ id }) => id));
  const hashOf = (text: string): string => {
    const hash = newHash();
    hash.update(encodeUtf8(text));
    return `'sha256-${base64OfHex(hash.hex())}'`;
  };
  const policy = [
    "default-src 'none'",
    // The worker has the SIMD engine's kernels in its code and compiles them; evaluating text as script stays forbidden.
    `script-src ${hashOf(script)} 'wasm-unsafe-eval'`,
    `style-src ${hashOf(style)}`,
    'worker-src blob:',
    "base-uri 'none'",
    "form-action 'none'",
  ].join('; ');
  return `<!doctype html>
<html lang="${quoted(page.language)}" data-door="file">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${quoted(policy)}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<title>${quoted(page.title)}</title>
<style>${style}</style>
</head>
<body>
<noscript>This page computes what it shows: it needs JavaScript.</noscript>
${blocks.map(blockText).join('\n')}
<script>${script}</script>
</body>
</html>
`;
}

/** A script whose text cannot end or hide its element; inside strings and expressions alike these spellings mean the same. */
function inert(script: string): string {
  return script.replace(/<(?=\/script)/gi, '<\\').replace(/<(?=!--)/g, '\\x3c');
}

function blockText(block: CarriedBlock): string {
  if ('bytes' in block) return `<script type="application/base64" id="${block.id}">${base64(block.bytes)}</script>`;
  return `<script type="application/json" id="${block.id}">${inertJson(block.json)}</script>`;
}

/** JSON that cannot end its element: within it a `<` can only stand in a text, where it may be written so. */
export function inertJson(value: unknown): string {
  return JSON.stringify(value).replace(/</g, '\\u003c');
}

function checkIds(ids: readonly string[]): void {
  for (const [index, id] of ids.entries()) {
    if (!/^[a-z][a-z0-9-]*$/.test(id)) throw new RangeError(`Expected a name for a block but received ${id}`);
    if (ids.indexOf(id) !== index) throw new RangeError(`Expected one block ${id} but received two`);
  }
}

function quoted(text: string): string {
  return text.replace(/[&<>"']/g, (character) => `&#${character.charCodeAt(0)};`);
}
