// What an exported page carries: blocks of data in the document, which no browser executes (core/export/document.ts).

/** The JSON of a block; null where the document has no such block. */
export function carriedJson(source: Document, id: string): unknown {
  const text = source.getElementById(id)?.textContent;
  return text == null ? null : JSON.parse(text);
}

/** The bytes of a block, in a buffer of their own; null where the document has no such block. Decodes a slice at a time, so that
 *  the page stays free, and leaves the text where it is: it may be asked for again. */
export async function carriedBytes(source: Document, id: string): Promise<ArrayBuffer | null> {
  const text = source.getElementById(id)?.textContent;
  if (text == null) return null;
  const padding = text.endsWith('==') ? 2 : text.endsWith('=') ? 1 : 0;
  const bytes = new Uint8Array((text.length / 4) * 3 - padding);
  let at = 0;
  for (let start = 0; start < text.length; start += SLICE_LETTERS) {
    const slice = atob(text.slice(start, start + SLICE_LETTERS));
    for (let i = 0; i < slice.length; i++) bytes[at++] = slice.charCodeAt(i);
    if (start > 0) await new Promise((resolve) => setTimeout(resolve, 0));
  }
  return bytes.buffer;
}

/** Whole groups of four letters; some 10 ms. */
const SLICE_LETTERS = 4 << 18;
