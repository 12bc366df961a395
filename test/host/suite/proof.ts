import assert from 'node:assert/strict';
import * as vscode from 'vscode';
import { test, until } from './runner.ts';
import { inFolder } from './workspace.ts';

test('a proof opens in a custom editor, and never unasked', async () => {
  await vscode.commands.executeCommand('vscode.open', inFolder('leaf.png'));
  const input = () => vscode.window.tabGroups.activeTabGroup.activeTab?.input;
  await until('the editor of the host', () => input() instanceof vscode.TabInputCustom);
  assert.notEqual((input() as vscode.TabInputCustom).viewType, 'sizeproof.proof');
  await vscode.commands.executeCommand('sizeproof.openProof', inFolder('leaf.png'));
  await until('the proof', () => {
    const shown = input();
    return shown instanceof vscode.TabInputCustom && shown.viewType === 'sizeproof.proof';
  });
  // It took the place of the passing look, and takes none that somebody kept.
  assert.equal(tabsOfLeaf(), 1);
  await vscode.commands.executeCommand('workbench.action.closeAllEditors');
  await vscode.commands.executeCommand('vscode.open', inFolder('leaf.png'), { preview: false });
  await vscode.commands.executeCommand('sizeproof.openProof', inFolder('leaf.png'));
  await until('both', () => tabsOfLeaf() === 2);
  await vscode.commands.executeCommand('workbench.action.closeAllEditors');
});

function tabsOfLeaf(): number {
  return vscode.window.tabGroups.activeTabGroup.tabs.filter(({ label }) => label === 'leaf.png').length;
}

test('a report of a texture goes to the clipboard', async () => {
  await vscode.commands.executeCommand('sizeproof.copyReport', inFolder('tasked/icon.png'));
  const text = await vscode.env.clipboard.readText();
  assert.match(text, /alpha\.use/);
  assert.match(text, /image\t0\t/);
});
