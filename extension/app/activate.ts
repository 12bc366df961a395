import * as vscode from 'vscode';
import { BuildDesk } from './build/desk.ts';
import { buildOnSave } from './build/on-save.ts';
import { registerCommands } from './commands.ts';
import type { Platform } from './platform.ts';
import { pagesFolder, registerProofEditor } from './proof/editor.ts';
import { OpenPages } from './proof/open-pages.ts';
import { openReviews } from './review/register.ts';
import { watchSettings } from './settings/diagnostics.ts';
import { serveExplanations } from './settings/explain.ts';
import { serveSchema } from './settings/schema.ts';
import { provideTasks } from './tasks/provider.ts';

/** Everything the extension does in an editor, on the ports of whichever host runs it. */
export function activateApp(context: vscode.ExtensionContext, platform: Platform): void {
  const log = vscode.window.createOutputChannel('Sizeproof', { log: true });
  const desk = new BuildDesk(platform, log);
  const tools = { platform, desk, log, open: new OpenPages() };
  const reviews = openReviews(context, platform, log);
  context.subscriptions.push(
    log,
    desk,
    watchSettings(),
    serveSchema(),
    serveExplanations(platform),
    registerProofEditor(context.extensionUri, tools),
    reviews,
    registerCommands(tools, reviews, pagesFolder(context.extensionUri)),
    provideTasks(desk),
    buildOnSave(desk, platform),
  );
}
