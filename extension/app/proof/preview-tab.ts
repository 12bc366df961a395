import * as vscode from 'vscode';
import { VIEW_TYPE } from './editor.ts';

/** Closes the passing look at a file that the group in front has beside its proof, which takes its place as a reopened editor does.
 *  An editor that somebody kept stays. */
export async function closePreviewOf(uri: vscode.Uri): Promise<void> {
  const passing = vscode.window.tabGroups.activeTabGroup.tabs.filter(
    ({ isPreview, input }) => isPreview && isOther(input) && input.uri.toString() === uri.toString(),
  );
  await vscode.window.tabGroups.close(passing, true);
}

function isOther(input: unknown): input is vscode.TabInputText | vscode.TabInputCustom {
  if (input instanceof vscode.TabInputCustom) return input.viewType !== VIEW_TYPE;
  return input instanceof vscode.TabInputText;
}
