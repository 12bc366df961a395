import { spawn } from 'node:child_process';

/** Runs a program and answers what it printed. Throws with all that it printed where it fails. */
export function run(program: string, args: readonly string[], folder: string, env = process.env): Promise<string> {
  return new Promise((resolve, reject) => {
    const child = spawn(program, args, { cwd: folder, env, stdio: ['ignore', 'pipe', 'pipe'] });
    let printed = '';
    let complained = '';
    child.stdout.on('data', (data) => {
      printed += data;
    });
    child.stderr.on('data', (data) => {
      complained += data;
    });
    child.on('error', reject);
    child.on('close', (code) => {
      if (code === 0) resolve(printed);
      else reject(new Error(`${program} ${args.join(' ')} ended with exit code ${code}:\n${printed}${complained}`));
    });
  });
}

/** Runs npm by this Node where npm started us, else as it is on the PATH. */
export function runNpm(args: readonly string[], folder: string): Promise<string> {
  const script = process.env.npm_execpath;
  return script?.endsWith('npm-cli.js') ? run(process.execPath, [script, ...args], folder) : run('npm', args, folder);
}
