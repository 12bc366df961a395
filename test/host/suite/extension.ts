import assert from 'node:assert/strict';
import * as vscode from 'vscode';
import { test, until } from './runner.ts';
import { EXTENSION, inFolder, write } from './workspace.ts';

function extension(): vscode.Extension<unknown> {
  const found = vscode.extensions.getExtension(EXTENSION);
  assert.ok(found);
  return found;
}

test('nothing is active in a folder without settings, whatever else is opened there', async () => {
  assert.equal(extension().isActive, false);
  // The editor writes its own settings by way of a document, which wakes whoever waits for its language.
  const editor = vscode.workspace.getConfiguration('editor');
  await editor.update('rulers', [80], vscode.ConfigurationTarget.Global);
  await editor.update('rulers', undefined, vscode.ConfigurationTarget.Global);
  await write('other.jsonc', '{ "compilerOptions": {} }\n');
  await vscode.window.showTextDocument(inFolder('other.jsonc'));
  await until('those who serve that language', async () => {
    const symbols = await vscode.commands.executeCommand<unknown[] | undefined>(
      'vscode.executeDocumentSymbolProvider',
      inFolder('other.jsonc'),
    );
    return symbols !== undefined && symbols.length > 0;
  });
  assert.equal(extension().isActive, false);
  await vscode.commands.executeCommand('workbench.action.closeAllEditors');
});

test('a settings file that is opened wakes it, however deep it lies', async () => {
  await write('deep/er/sizeproof.json', '{ "defaults": { "kernal": "box" } }\n');
  await vscode.window.showTextDocument(inFolder('deep/er/sizeproof.json'));
  await until('the extension', () => extension().isActive);
  await until('a problem of the settings', () => {
    const found = vscode.languages.getDiagnostics(inFolder('deep/er/sizeproof.json'));
    return found.some((each) => each.code === 'unknown-key');
  });
  await vscode.commands.executeCommand('workbench.action.closeAllEditors');
  await vscode.workspace.fs.delete(inFolder('deep'), { recursive: true });
});

test('every command of package.json is there', async () => {
  const known = new Set(await vscode.commands.getCommands(true));
  const { contributes } = extension().packageJSON;
  const names: string[] = contributes.commands.map((each: { command: string }) => each.command);
  assert.ok(names.length >= 10);
  assert.deepEqual(
    names.filter((name) => !known.has(name)),
    [],
  );
});
