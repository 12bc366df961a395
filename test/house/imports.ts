import { posix } from 'node:path';
import ts from 'typescript';

import { type Source, walkSyntax } from './tree.ts';

/** One import of a source. */
export interface Import {
  readonly from: string;
  /** A path relative to the top for a file of the house, else the bare specifier: `node:fs`, `vscode`, `picomatch`. */
  readonly to: string;
  readonly kind: 'file' | 'package';
  /** Whether it is gone when the program runs. `import { type A }` is not: it still loads the file. */
  readonly erased: boolean;
}

/** Every import, re-export, dynamic import and import type of a source. */
export function importsOf(source: Source): Import[] {
  const found: Import[] = [];
  const add = (specifier: ts.Node | undefined, erased: boolean): void => {
    if (specifier === undefined) return;
    if (!ts.isStringLiteralLike(specifier)) {
      throw new TypeError(`Expected a literal specifier in ${source.path} but received ${specifier.getText()}`);
    }
    const text = specifier.text;
    const file = text.startsWith('.');
    const to = file ? posix.join(posix.dirname(source.path), text) : text;
    found.push({ from: source.path, to, kind: file ? 'file' : 'package', erased });
  };
  walkSyntax(source, (node) => {
    if (ts.isImportDeclaration(node)) add(node.moduleSpecifier, node.importClause?.isTypeOnly === true);
    else if (ts.isExportDeclaration(node)) add(node.moduleSpecifier, node.isTypeOnly);
    else if (ts.isImportTypeNode(node))
      add(ts.isLiteralTypeNode(node.argument) ? node.argument.literal : node.argument, true);
    else if (ts.isCallExpression(node) && node.expression.kind === ts.SyntaxKind.ImportKeyword)
      add(node.arguments[0], false);
  });
  return found;
}
