import assert from 'node:assert/strict';
import * as vscode from 'vscode';
import { test } from './runner.ts';
import { EXTENSION } from './workspace.ts';

test('nothing is active in a folder without settings, and a command wakes it', async () => {
  const extension = vscode.extensions.getExtension(EXTENSION);
  assert.ok(extension);
  assert.equal(extension.isActive, false);
  await vscode.commands.executeCommand('sizeproof.showLog');
  assert.equal(extension.isActive, true);
});

test('every command of package.json is there', async () => {
  const known = new Set(await vscode.commands.getCommands(true));
  const { contributes } = vscode.extensions.getExtension(EXTENSION)?.packageJSON ?? {};
  const names: string[] = contributes.commands.map((each: { command: string }) => each.command);
  assert.ok(names.length >= 10);
  assert.deepEqual(
    names.filter((name) => !known.has(name)),
    [],
  );
});
