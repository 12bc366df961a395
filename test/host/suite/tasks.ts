import assert from 'node:assert/strict';
import * as vscode from 'vscode';
import { test, until } from './runner.ts';
import { filesBelow, inFolder, write } from './workspace.ts';

test('building and checking are offered as tasks', async () => {
  const tasks = await vscode.tasks.fetchTasks({ type: 'sizeproof' });
  assert.deepEqual(tasks.map((each) => each.definition.command).sort(), ['build', 'check']);
  assert.deepEqual(
    tasks.map((each) => each.problemMatchers),
    [['$sizeproof'], ['$sizeproof']],
  );
});

test('a task that a file defines builds the paths that it names', async () => {
  await write('tasked/sizeproof.json', '{}\n');
  await vscode.workspace.fs.copy(inFolder('icon.png'), inFolder('tasked/icon.png'), { overwrite: true });
  const definition = { type: 'sizeproof', command: 'build', paths: ['tasked'], label: 'art' };
  await write('.vscode/tasks.json', JSON.stringify({ version: '2.0.0', tasks: [definition] }));
  const task = await until('the task of tasks.json', async () => {
    const tasks = await vscode.tasks.fetchTasks({ type: 'sizeproof' });
    return tasks.find((each) => each.name === 'art') ?? null;
  });
  const ended = new Promise<void>((resolve) => {
    const listening = vscode.tasks.onDidEndTask(({ execution }) => {
      if (execution.task.name !== 'art') return;
      listening.dispose();
      resolve();
    });
  });
  await vscode.tasks.executeTask(task);
  await ended;
  assert.ok([...filesBelow(inFolder('tasked/built').fsPath).keys()].includes('icon.mips.json'));
});
