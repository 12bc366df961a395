import assert from 'node:assert/strict';
import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import * as vscode from 'vscode';
import { test, until } from './runner.ts';
import { EXTENSION, filesBelow, inFolder, write } from './workspace.ts';

interface Report {
  readonly textures: readonly { readonly source: string; readonly action: string; readonly moved: readonly string[] }[];
  readonly problems: readonly { readonly code: string }[];
}

test('a build writes byte for byte what the command line writes', async () => {
  await write('art/sizeproof.json', '{ "defaults": { "outputs": ["png", "ktx2"] } }\n');
  await vscode.workspace.fs.copy(inFolder('leaf.png'), inFolder('art/sub/leaf.png'), { overwrite: true });
  await vscode.workspace.fs.copy(inFolder('icon.png'), inFolder('art/icon.png'), { overwrite: true });
  const report = await vscode.commands.executeCommand<Report>('sizeproof.build', inFolder('art'));
  assert.deepEqual(
    report.textures.map(({ action }) => action),
    ['built', 'built'],
  );
  const cli = join(vscode.extensions.getExtension(EXTENSION)?.extensionPath ?? '', 'dist', 'cli.js');
  const twin = mkdtempSync(join(tmpdir(), 'twin-'));
  try {
    writeFileSync(join(twin, 'sizeproof.json'), readFileSync(inFolder('art/sizeproof.json').fsPath));
    await vscode.workspace.fs.copy(inFolder('art/sub'), vscode.Uri.file(join(twin, 'sub')));
    await vscode.workspace.fs.copy(inFolder('art/icon.png'), vscode.Uri.file(join(twin, 'icon.png')));
    execFileSync(process.execPath, [cli, 'build', twin], { env: { ...process.env, ELECTRON_RUN_AS_NODE: '1' } });
    const [ours, theirs] = [inFolder('art/built').fsPath, join(twin, 'built')].map(filesBelow);
    assert.ok(ours.size > 10);
    assert.deepEqual(ours, theirs);
  } finally {
    rmSync(twin, { recursive: true, force: true });
  }
});

test('a second build finds nothing to do', async () => {
  const report = await vscode.commands.executeCommand<Report>('sizeproof.build', inFolder('art'));
  assert.deepEqual(
    report.textures.map(({ action }) => action),
    ['unchanged', 'unchanged'],
  );
});

test('a check says that a source moved, in the list of problems too', async () => {
  const leaf = inFolder('art/sub/leaf.png');
  await vscode.workspace.fs.copy(inFolder('icon.png'), leaf, { overwrite: true });
  const report = await vscode.commands.executeCommand<Report>('sizeproof.check', inFolder('art'));
  assert.deepEqual(
    report.textures.map(({ moved }) => moved),
    [[], ['source']],
  );
  const found = vscode.languages.getDiagnostics(leaf);
  assert.deepEqual(
    found.map(({ code, source }) => [source, code]),
    [['Sizeproof', 'stale']],
  );
});

test('a rebuild refuses the moved source, a build takes it, and the problem goes', async () => {
  const manifest = inFolder('art/built/sub/leaf.mips.json');
  const refused = await vscode.commands.executeCommand<Report>('sizeproof.rebuild', manifest);
  assert.deepEqual(
    refused.problems.map(({ code }) => code),
    ['source-moved'],
  );
  const leaf = inFolder('art/sub/leaf.png');
  await vscode.commands.executeCommand('sizeproof.build', leaf);
  assert.deepEqual(vscode.languages.getDiagnostics(leaf), []);
});

test('settings that are typed and not saved are saved before a build', async () => {
  const settings = await vscode.workspace.openTextDocument(inFolder('art/sizeproof.json'));
  const edit = new vscode.WorkspaceEdit();
  edit.replace(settings.uri, new vscode.Range(0, 0, 1, 0), '{ "defaults": { "levels": "none", "targets": ["2x"] } }\n');
  await vscode.workspace.applyEdit(edit);
  assert.equal(settings.isDirty, true);
  await vscode.commands.executeCommand('sizeproof.build', inFolder('art/icon.png'));
  assert.equal(settings.isDirty, false);
  assert.ok([...filesBelow(inFolder('art/built').fsPath).keys()].includes('icon.2x.png'));
});

test('saved settings build by themselves where they are asked to', async () => {
  const configuration = vscode.workspace.getConfiguration('sizeproof');
  await configuration.update('buildOnSave', 'settings', vscode.ConfigurationTarget.Workspace);
  try {
    const settings = await vscode.workspace.openTextDocument(inFolder('art/sizeproof.json'));
    const edit = new vscode.WorkspaceEdit();
    edit.replace(
      settings.uri,
      new vscode.Range(0, 0, 1, 0),
      '{ "defaults": { "levels": "none", "targets": ["3x"] } }\n',
    );
    await vscode.workspace.applyEdit(edit);
    await settings.save();
    await until('an output of the new settings', () =>
      [...filesBelow(inFolder('art/built').fsPath).keys()].includes('icon.3x.png'),
    );
  } finally {
    await configuration.update('buildOnSave', undefined, vscode.ConfigurationTarget.Workspace);
  }
});
