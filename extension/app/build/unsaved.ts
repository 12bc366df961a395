import * as vscode from 'vscode';
import { isSettings } from '../files/place.ts';

/** Settings that are typed and not saved would not be what is built. The only unsaved document is saved; where there are others
 *  too, the user is asked. False where the user wants no build. */
export async function settleUnsavedSettings(): Promise<boolean> {
  const dirty = vscode.workspace.textDocuments.filter((each) => each.isDirty);
  const settings = dirty.filter((each) => isSettings(each.uri));
  if (settings.length === 0) return true;
  if (dirty.length === settings.length && settings.length === 1) return settings[0].save();
  const save = vscode.l10n.t('Save and Build');
  const leave = vscode.l10n.t('Build What Is Saved');
  const names = settings.map((each) => vscode.workspace.asRelativePath(each.uri)).join(', ');
  const chosen = await vscode.window.showWarningMessage(
    vscode.l10n.t('{names} has changes that are not saved. What is to be built?', { names }),
    { modal: true },
    save,
    leave,
  );
  if (chosen === leave) return true;
  if (chosen !== save) return false;
  for (const each of settings) if (!(await each.save())) return false;
  return true;
}
