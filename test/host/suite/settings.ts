import assert from 'node:assert/strict';
import * as vscode from 'vscode';
import { test, until } from './runner.ts';
import { folder, inFolder, write } from './workspace.ts';

/** Diagnostics of a document, once they pass. */
function diagnostics(uri: vscode.Uri, passes: (found: readonly vscode.Diagnostic[]) => boolean) {
  return until('diagnostics', () => {
    const found = vscode.languages.getDiagnostics(uri);
    return passes(found) && found;
  });
}

test('a settings file is created once, with comments that its language allows', async () => {
  await vscode.commands.executeCommand('sizeproof.createSettings', folder());
  const document = await vscode.workspace.openTextDocument(inFolder('sizeproof.json'));
  assert.match(document.getText(), /^\/\/ Settings of Sizeproof/);
  assert.equal(document.languageId, 'jsonc');
  assert.equal(vscode.window.activeTextEditor?.document, document);
});

test('problems have exact places and repairs, and nobody reports them twice', async () => {
  const text = '{\n  // a comment\n  "defaults": { "kernal": "box", "fill": "hiden", "alpha": { "cutoff": 2 } }\n}\n';
  await write('faulty/sizeproof.json', text);
  const document = await vscode.workspace.openTextDocument(inFolder('faulty/sizeproof.json'));
  await vscode.window.showTextDocument(document);
  const found = await diagnostics(document.uri, (each) => each.length === 3);
  assert.deepEqual(
    found.map(({ code, range, source }) => [source, code, document.getText(range)]),
    [
      ['Sizeproof', 'unknown-key', '"kernal"'],
      ['Sizeproof', 'bad-choice', '"hiden"'],
      ['Sizeproof', 'out-of-range', '2'],
    ],
  );
  for (const [at, title] of [
    [0, 'Replace with "kernel"'],
    [1, 'Replace with "hidden"'],
  ] as const) {
    const range = found[at].range;
    const actions = await vscode.commands.executeCommand<vscode.CodeAction[]>(
      'vscode.executeCodeActionProvider',
      document.uri,
      range,
    );
    const action = actions.find((each) => each.title === title);
    assert.ok(action?.edit, `${title} among ${actions.map((each) => each.title)}`);
    await vscode.workspace.applyEdit(action.edit);
    // The next repair is asked for at a place that the first has moved.
    if (at === 0) await diagnostics(document.uri, (each) => each.length === 2);
  }
  const [left] = await diagnostics(document.uri, (each) => each.length === 1);
  assert.equal(left.code, 'out-of-range');
  await vscode.commands.executeCommand('workbench.action.revertAndCloseActiveEditor');
});

test('keys and choices are completed and explained', async () => {
  await write('completed/sizeproof.json', '{ "defaults": { "kernel": "", "" } }\n');
  const uri = inFolder('completed/sizeproof.json');
  const document = await vscode.workspace.openTextDocument(uri);
  await vscode.window.showTextDocument(document);
  const offered = async (column: number) => {
    const list = await vscode.commands.executeCommand<vscode.CompletionList>(
      'vscode.executeCompletionItemProvider',
      uri,
      new vscode.Position(0, column),
    );
    return list.items.map((each) => (typeof each.label === 'string' ? each.label : each.label.label));
  };
  await until('choices of kernels', async () => (await offered(27)).includes('"mitchell"'));
  await until('keys', async () => {
    const keys = await offered(31);
    return keys.includes('wrap') && keys.includes('alpha') && !keys.includes('kernel');
  });
  await until('what a key says', async () => {
    const hovers = await vscode.commands.executeCommand<vscode.Hover[]>(
      'vscode.executeHoverProvider',
      uri,
      new vscode.Position(0, 19),
    );
    const said = hovers.flatMap((each) => each.contents.map((content) => (content as vscode.MarkdownString).value));
    return said.some((each) => /Weighting function/.test(each));
  });
  await vscode.commands.executeCommand('workbench.action.revertAndCloseActiveEditor');
});

test('an explanation names every setting, and follows what is typed', async () => {
  await write('why/sizeproof.json', '{ "treatments": [{ "match": "*.png", "kernel": "box" }] }\n');
  await vscode.workspace.fs.copy(inFolder('leaf.png'), inFolder('why/leaf.png'), { overwrite: true });
  await vscode.commands.executeCommand('sizeproof.explain', inFolder('why/leaf.png'));
  const shown = vscode.window.activeTextEditor?.document;
  assert.match(
    shown?.getText() ?? '',
    /kernel\.minify +\{"name":"box","params":\{\}\} .*treatments\[0\] .*sizeproof\.json:1:\d+/,
  );
  const links = await vscode.commands.executeCommand<vscode.DocumentLink[]>('vscode.executeLinkProvider', shown?.uri);
  assert.ok(links.some((each) => each.target?.fragment.startsWith('L1,')));
  const settings = await vscode.workspace.openTextDocument(inFolder('why/sizeproof.json'));
  const edit = new vscode.WorkspaceEdit();
  edit.replace(settings.uri, new vscode.Range(0, 47, 0, 52), '"even"');
  await vscode.workspace.applyEdit(edit);
  await until('an explanation of what is typed', () => /"name":"even"/.test(shown?.getText() ?? ''));
  await vscode.window.showTextDocument(settings);
  await vscode.commands.executeCommand('workbench.action.revertAndCloseActiveEditor');
});

test('the settings of a texture open at its treatment', async () => {
  await vscode.commands.executeCommand('sizeproof.openSettings', inFolder('why/leaf.png'));
  const editor = vscode.window.activeTextEditor;
  assert.equal(editor?.document.uri.path, inFolder('why/sizeproof.json').path);
  assert.equal(editor.selection.active.character, 28);
});
