import * as vscode from 'vscode';
import { openSchema } from '../../../core/treatment/schema/open-schema.ts';

/** Named in package.json, under `jsonValidation`, and as what wakes the extension: the editor asks for the schema as soon as a
 *  settings file is opened, and at no other time. To wait for the file's language would wake it for every file of that language,
 *  also for those that the editor writes its own settings by. */
const SCHEME = 'sizeproof-schema';

/** Serves the schema by which editors complete and explain settings files. */
export function serveSchema(): vscode.Disposable {
  return vscode.workspace.registerTextDocumentContentProvider(SCHEME, {
    provideTextDocumentContent: () => JSON.stringify(openSchema()),
  });
}
