import { problemLine } from '../../core/line.ts';
import { exitCode } from '../../core/problem.ts';
import { type Arguments, readArguments } from './arguments.ts';
import { runBuild, runRebuild, runWatched } from './build-command.ts';
import { runCheck } from './check-command.ts';
import type { CommandName } from './commands.ts';
import { runExplain } from './explain-command.ts';
import { helpText } from './help.ts';
import { runInit } from './init-command.ts';
import { nameFrom } from './print.ts';
import { runProof } from './proof-command.ts';
import { runReview } from './review-command.ts';
import { conclude, onlyProblems, type Result, type Shell, type Voice } from './shell.ts';
import { buildOnChange } from './watch.ts';

/** Runs one command line and answers its exit code. */
export async function runCommand(words: readonly string[], version: string, shell: Shell): Promise<number> {
  const args = readArguments(words);
  if (!('flags' in args))
    return conclude(shell, null, onlyProblems(args), words.includes('--json') ? 'json' : 'people');
  const voice: Voice = args.flags.has('json') ? 'json' : args.flags.has('quiet') ? 'problems' : 'people';
  switch (args.command) {
    case 'help':
      shell.stdout.write(helpText(version));
      return 0;
    case 'version':
      shell.stdout.write(`${version}\n`);
      return 0;
    default:
      if (args.flags.has('watch')) return watchBuild(args, shell, voice);
      return conclude(shell, args.command, await commands[args.command](args, shell), voice);
  }
}

const commands: Readonly<Record<CommandName, (args: Arguments, shell: Shell) => Promise<Result>>> = {
  init: runInit,
  build: runBuild,
  check: runCheck,
  rebuild: runRebuild,
  explain: runExplain,
  proof: runProof,
  review: runReview,
};

async function watchBuild(args: Arguments, shell: Shell, voice: Voice): Promise<number> {
  let code = 0;
  let said: string | null = null;
  await buildOnChange(
    async () => {
      const { result, roots } = await runWatched(args, shell);
      // The build after a build has nothing new to say.
      const saying = JSON.stringify(result.problems);
      const isNews = result.summary.built > 0 || saying !== said;
      if (isNews && !result.cancelled) code = conclude(shell, 'build', result, voice);
      said = saying;
      return roots;
    },
    shell.stopped,
    (problem) => {
      code = Math.max(code, exitCode([problem]));
      shell.stderr.write(`${problemLine(problem, nameFrom(shell.folder))}\n`);
    },
  );
  return shell.isCancelled() ? 130 : code;
}
