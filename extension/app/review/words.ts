import * as vscode from 'vscode';
import { harmWords } from '../../../core/review/harms.ts';
import type { Harm } from '../../../core/review/impact.ts';
import { percent, type Verdict, verdicts } from '../../../core/review/verdict.ts';
import { sayImage } from '../../../core/review/visible.ts';

/** A verdict in the user's language. */
export function sayVerdict({ kind, values }: Verdict): string {
  return vscode.l10n.t(verdicts[kind], { ...values });
}

/** A harm in the user's language. */
export function sayHarm({ name, severity, image }: Harm): string {
  const values = { share: percent(severity), image: image === null ? '' : sayImage(image) };
  return vscode.l10n.t(harmWords[name], values);
}
