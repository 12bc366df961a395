import ts from 'typescript';

import { placeOf, type Source, walkSyntax } from './tree.ts';

// ECMA-262 leaves the other functions of Math "implementation-approximated"; these are exact, or correctly rounded.
const EXACT_MATH = new Set([
  ...['abs', 'ceil', 'clz32', 'floor', 'fround', 'imul', 'max', 'min', 'round', 'sign', 'sqrt', 'trunc'],
  ...['E', 'LN10', 'LN2', 'LOG10E', 'LOG2E', 'PI', 'SQRT1_2', 'SQRT2'],
]);

/** The clock, the user's language, the collector and the way round. What else a platform has, core's tsconfig does not know. */
const IMPURE_GLOBALS = new Set([
  'Date',
  'performance',
  'console',
  'Intl',
  'globalThis',
  'WeakRef',
  'FinalizationRegistry',
]);

const LANGUAGE_METHOD = /^(localeCompare|toLocale\w+)$/;

/** `path:line what` for everything in a source whose result may differ from machine to machine or from run to run. */
export function impurities(source: Source): string[] {
  const found: string[] = [];
  walkSyntax(source, (node) => {
    const what = impurity(node);
    if (what !== null) found.push(`${placeOf(source, node)} ${what}`);
  });
  return found;
}

function impurity(node: ts.Node): string | null {
  if (ts.isBinaryExpression(node) && /^\*\*=?$/.test(node.operatorToken.getText())) {
    return isExactPower(node) ? null : node.getText();
  }
  if (!ts.isIdentifier(node)) return null;
  const parent = node.parent;
  if (ts.isPropertyAccessExpression(parent) && parent.name === node) {
    return LANGUAGE_METHOD.test(node.text) ? node.text : null;
  }
  if (ts.isPropertyAssignment(parent) || ts.isPropertySignature(parent)) {
    if (parent.name === node) return null;
  }
  if (node.text === 'Math') {
    return takenFromMath(parent).every((member) => EXACT_MATH.has(member)) ? null : parent.getText();
  }
  return IMPURE_GLOBALS.has(node.text) ? node.text : null;
}

/** Members that `Math.x` and `const { x } = Math` take; anything else might take all of them. */
function takenFromMath(parent: ts.Node): string[] {
  if (ts.isPropertyAccessExpression(parent)) return [parent.name.text];
  if (ts.isVariableDeclaration(parent) && ts.isObjectBindingPattern(parent.name)) {
    return parent.name.elements.map((each) => (each.propertyName ?? each.name).getText());
  }
  return ['all'];
}

/** A whole power, or a power of two: exact while the result is. */
function isExactPower(node: ts.BinaryExpression): boolean {
  const power = ts.isPrefixUnaryExpression(node.right) ? node.right.operand : node.right;
  if (ts.isNumericLiteral(power)) return Number.isInteger(Number(power.text));
  return ts.isNumericLiteral(node.left) && node.left.text === '2';
}
