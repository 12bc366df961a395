import { createScanner, type Node, type ParseError, parseTree } from 'jsonc-parser';
import type { Reading } from './reading.ts';

/** Objects and lists within each other; a settings file needs 6. */
const MAX_DEPTH = 64;

/** Parses JSON with comments and trailing commas into a tree with offsets. Reports the first thing that is not such a text:
 *  what a parser finds after it is mostly its echo. */
export function parseText(reading: Reading, text: string): Node | null {
  const deep = firstTooDeep(text);
  if (deep !== null) return fail(reading, deep, `more than ${MAX_DEPTH} objects and lists lie within each other`);
  const errors: ParseError[] = [];
  const root = parseTree(text, errors, { allowTrailingComma: true, disallowComments: false, allowEmptyContent: false });
  if (errors.length > 0) return fail(reading, errors[0].offset, reasons[errors[0].error] ?? 'the text cannot be read');
  return root ?? fail(reading, 0, reasons[4]);
}

function fail(reading: Reading, offset: number, reason: string): null {
  const { path } = reading;
  reading.problems.push({
    code: 'settings-syntax',
    severity: 'error',
    values: { reason },
    path,
    ...reading.spot(offset),
  });
  return null;
}

/** The offset of the bracket that goes too deep; the parser calls itself for each, so that must not be left to it. */
function firstTooDeep(text: string): number | null {
  const scanner = createScanner(text, true);
  let depth = 0;
  for (let token: number = scanner.scan(); token !== END; token = scanner.scan()) {
    if (token === OPEN_BRACE || token === OPEN_BRACKET) depth += 1;
    if (token === CLOSE_BRACE || token === CLOSE_BRACKET) depth -= 1;
    if (depth > MAX_DEPTH) return scanner.getTokenOffset();
  }
  return null;
}

// SyntaxKind of the scanner, whose enumeration is there for types alone.
const OPEN_BRACE = 1;
const CLOSE_BRACE = 2;
const OPEN_BRACKET = 3;
const CLOSE_BRACKET = 4;
const END = 17;

/** By ParseErrorCode of the parser. */
const reasons: Readonly<Record<number, string>> = {
  1: 'this word means nothing here',
  2: 'this number is malformed',
  3: 'a key in double quotes is expected',
  4: 'a value is expected',
  5: 'a colon is expected',
  6: 'a comma is expected',
  7: 'a closing } is expected',
  8: 'a closing ] is expected',
  9: 'the text goes on after its end',
  10: 'a comment cannot stand here',
  11: 'a comment is not closed',
  12: 'a text in quotes is not closed',
  13: 'this number breaks off',
  14: 'a \\u needs four hexadecimal digits',
  15: 'this \\ sequence means nothing',
  16: 'this character cannot stand here',
};
