import { createScanner, type Node } from 'jsonc-parser';

/** JSON on one line, with spaces as a person would set them. */
export function oneLineJson(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map(oneLineJson).join(', ')}]`;
  if (typeof value !== 'object' || value === null) return JSON.stringify(value);
  const fields = Object.entries(value).map(([key, each]) => `${JSON.stringify(key)}: ${oneLineJson(each)}`);
  return fields.length === 0 ? '{}' : `{ ${fields.join(', ')} }`;
}

/** The text with one more item, or `"key": value`, at the end of a list or object of it. What is there stays as it is; a comment
 *  behind the last item stays behind that item. */
export function appendItem(text: string, container: Node, item: string): string {
  const eol = text.includes('\r\n') ? '\r\n' : '\n';
  const end = container.offset + container.length - 1;
  const last = container.children?.at(-1);
  const isWide = text.slice(container.offset, end).includes('\n');
  const indent = isWide ? indentInside(text, container) : '';
  if (last === undefined) {
    const open = container.offset + 1;
    const isBare = text.slice(open, end).trim() === '';
    if (!isBare) return splice(text, open, open, `${eol}${indent}${item}`);
    if (isWide) return splice(text, open, end, `${eol}${indent}${item}${eol}${indentOf(text, container.offset)}`);
    return splice(text, open, end, container.type === 'object' ? ` ${item} ` : item);
  }
  const lastEnd = last.offset + last.length;
  const { comma, lineEnd } = behind(text, lastEnd, end);
  const separated = comma ? text.slice(lastEnd, lineEnd) : `,${text.slice(lastEnd, lineEnd)}`;
  const closing = comma ? ',' : '';
  if (isWide) return splice(text, lastEnd, lineEnd, `${separated}${eol}${indent}${item}${closing}`);
  return splice(text, lastEnd, lastEnd, `, ${item}`);
}

/** Whether a comma follows, and where what belongs to an item's own line ends: a comma and comments behind it. */
function behind(text: string, from: number, limit: number): { readonly comma: boolean; readonly lineEnd: number } {
  const scanner = createScanner(text, false);
  scanner.setPosition(from);
  let comma = false;
  let lineEnd = from;
  let isOwnLine = true;
  for (let token: number = scanner.scan(); scanner.getTokenOffset() < limit; token = scanner.scan()) {
    if (token === LINE_BREAK) isOwnLine = false;
    else if (token === COMMA) comma = true;
    else if (token !== LINE_COMMENT && token !== BLOCK_COMMENT && token !== SPACE) break;
    if (isOwnLine ? token !== SPACE : token === COMMA) lineEnd = scanner.getTokenOffset() + scanner.getTokenLength();
  }
  return { comma, lineEnd };
}

/** Indent of the items of a container that is spread over lines. */
function indentInside(text: string, container: Node): string {
  const first = container.children?.[0];
  if (first !== undefined && /[\r\n][ \t]*$/.test(text.slice(container.offset, first.offset))) {
    return indentOf(text, first.offset);
  }
  const unit = /^([ \t]+)\S/m.exec(text)?.[1] ?? '  ';
  return indentOf(text, container.offset) + unit;
}

/** Indent of the line that an offset is on. */
function indentOf(text: string, offset: number): string {
  const start = Math.max(text.lastIndexOf('\n', offset - 1), text.lastIndexOf('\r', offset - 1)) + 1;
  return /^[ \t]*/.exec(text.slice(start, offset))?.[0] ?? '';
}

function splice(text: string, from: number, to: number, by: string): string {
  return text.slice(0, from) + by + text.slice(to);
}

// SyntaxKind of the scanner, whose enumeration is there for types alone.
const COMMA = 5;
const LINE_COMMENT = 12;
const BLOCK_COMMENT = 13;
const LINE_BREAK = 14;
const SPACE = 15;
