import { build } from '../node/project.ts';

// Builds a folder with one settings file and then the other, without an end: a program to be killed. It says when a build is
// done.

const folder = process.argv[2];

for (let turn = 0; ; turn++) {
  await build(folder, { query: { settings: `${turn % 2}.json` } });
  process.stdout.write('built\n');
}
