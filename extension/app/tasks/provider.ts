import * as vscode from 'vscode';
import type { BuildDesk } from '../build/desk.ts';
import { openTerminal, type TaskCommand } from './terminal.ts';

const TYPE = 'sizeproof';

/** Offers to build and to check each folder of the workspace as tasks, and resolves those that a tasks.json defines. */
export function provideTasks(desk: BuildDesk): vscode.Disposable {
  return vscode.tasks.registerTaskProvider(TYPE, {
    provideTasks: () =>
      (vscode.workspace.workspaceFolders ?? []).flatMap((folder) => [
        taskFor({ type: TYPE, command: 'build' }, folder, desk),
        taskFor({ type: TYPE, command: 'check' }, folder, desk),
      ]),
    resolveTask(task) {
      const folder = typeof task.scope === 'object' ? task.scope : vscode.workspace.workspaceFolders?.[0];
      return folder === undefined ? undefined : taskFor(task.definition, folder, desk);
    },
  });
}

function taskFor(definition: vscode.TaskDefinition, folder: vscode.WorkspaceFolder, desk: BuildDesk): vscode.Task {
  const command: TaskCommand = definition.command === 'check' ? 'check' : 'build';
  const given: unknown = definition.paths;
  const paths = Array.isArray(given) ? given.filter((each) => typeof each === 'string') : ['.'];
  const resources = paths.map((path) => vscode.Uri.joinPath(folder.uri, path));
  const execution = new vscode.CustomExecution(async () => openTerminal(command, folder, resources, desk));
  const task = new vscode.Task(definition, folder, command, 'Sizeproof', execution, '$sizeproof');
  if (command === 'build') task.group = vscode.TaskGroup.Build;
  else task.group = vscode.TaskGroup.Test;
  return task;
}
